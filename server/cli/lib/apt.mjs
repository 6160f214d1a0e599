import { existsSync, mkdirSync, writeFileSync } from 'node:fs'
import { run } from './run.mjs'
import { Refusal, step } from './say.mjs'

const options = ['-o', 'DPkg::Lock::Timeout=300', '-o', 'Dpkg::Options::=--force-confold', '-o', 'Acquire::Retries=3']
const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive', LC_ALL: 'C' }

/** @type {Promise<unknown>} */
let queue = Promise.resolve()
let updated = false

/** @returns {boolean} whether this process may install Debian packages */
export function canInstall() {
  return process.getuid?.() === 0 && existsSync('/usr/bin/apt-get')
}

/**
 * Installs Debian packages, one call after another; the list of packages is brought up to date once.
 *
 * @param {string[]} packages
 * @returns {Promise<void>}
 * @throws {Refusal} with what apt-get said
 */
export function install(packages) {
  const turn = queue.then(async () => {
    if (!updated) {
      // A failing mirror shows itself at the installation, if it matters.
      await run('apt-get', ['update', '-q', ...options], { env })
      updated = true
    }
    step(`Installing ${packages.join(', ')} with apt-get`)
    const { code, output } = await run('apt-get', ['install', '-y', '-q', '--no-install-recommends', ...options, ...packages], { env })
    if (code !== 0) throw new Refusal(`apt-get could not install ${packages.join(', ')}:\n${output.trimEnd().split('\n').slice(-25).join('\n')}`)
  })
  queue = turn.catch(() => {})
  return turn
}

/** Keeps Debian from making and starting a cluster of its own, which nothing here uses. */
export function refuseMainCluster() {
  if (existsSync('/etc/postgresql')) return
  mkdirSync('/etc/postgresql-common/createcluster.d', { recursive: true })
  writeFileSync('/etc/postgresql-common/createcluster.d/no-main-cluster.conf', 'create_main_cluster = false\n')
}
