import { mkdirSync, readdirSync, renameSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { run, runOrRefuse } from './run.mjs'
import { Refusal, step } from './say.mjs'

/**
 * Unpacks PostgreSQL's server programs, and the libraries that this machine lacks, from Debian's packages
 * into a folder. Needs no root: apt-get keeps its lists in that folder too.
 *
 * @param {string} folder
 * @param {string} name of the package, with or without a version
 * @returns {Promise<void>}
 * @throws {Refusal} if there is no apt-get, no network or no such package
 */
export async function fetchPostgres(folder, name) {
  for (const program of ['apt-get', 'apt-cache', 'dpkg', 'dpkg-query']) {
    if ((await run(program, ['--version'])).code !== 0) throw new Refusal(`Packages can be unpacked without root only on Debian and its kin: ${program} was not found.`)
  }
  step('Fetching PostgreSQL’s packages, to be unpacked inside this checkout')
  const draft = `${folder}.new`
  rmSync(draft, { recursive: true, force: true })
  for (const part of ['lists/partial', 'cache/archives/partial', 'debs']) mkdirSync(join(draft, 'apt', part), { recursive: true })
  const apt = [
    '-o', `Dir::State::lists=${join(draft, 'apt/lists')}`, '-o', `Dir::Cache=${join(draft, 'apt/cache')}`,
    '-o', 'Dir::State::status=/var/lib/dpkg/status', '-o', 'Acquire::Retries=3', '-o', 'APT::Sandbox::User=',
  ]
  await runOrRefuse('Fetching the list of packages', 'apt-get', ['update', '-q', ...apt])
  const packages = await missingPackages(name, apt)
  await runOrRefuse('Fetching PostgreSQL’s packages', 'apt-get', ['download', '-q', ...apt, ...packages], { cwd: join(draft, 'apt/debs') })
  for (const file of readdirSync(join(draft, 'apt/debs'))) {
    await runOrRefuse(`Unpacking ${file}`, 'dpkg', ['-x', join(draft, 'apt/debs', file), draft])
  }
  rmSync(join(draft, 'apt'), { recursive: true })
  rmSync(folder, { recursive: true, force: true })
  renameSync(draft, folder)
}

/**
 * The server's package and every library package it needs that is not installed. The compiler for queries
 * (LLVM, most of the size) is left out: it is switched off.
 *
 * @param {string} name
 * @param {string[]} apt
 * @returns {Promise<string[]>}
 */
async function missingPackages(name, apt) {
  /** @type {Set<string>} */
  const wanted = new Set()
  const seen = new Set([name])
  const open = [name]
  for (let next = open.pop(); next; next = open.pop()) {
    const isServer = /^postgresql(-\d+)?$/.test(next)
    if (/^postgresql-\d+$/.test(next) || (!isServer && !(await isInstalled(next)))) wanted.add(next)
    else if (!isServer) continue
    const listing = await runOrRefuse(`Looking up ${next}`, 'apt-cache', ['depends', '--no-recommends', '--no-suggests', '--no-conflicts', '--no-breaks', '--no-replaces', '--no-enhances', ...apt, next])
    for (const [, dependency] of listing.matchAll(/^\s+(?:Pre)?Depends: ([^\s<>]+)$/gm)) {
      const follow = (isServer && /^postgresql-\d+$/.test(dependency)) || (/^(lib|zlib)/.test(dependency) && !/^lib(llvm|json-perl)/.test(dependency))
      if (follow && !seen.has(dependency)) open.push(dependency)
      seen.add(dependency)
    }
  }
  if (![...wanted].some(item => /^postgresql-\d+$/.test(item))) throw new Refusal(`Debian’s lists hold no server package under ${name}.`)
  return [...wanted]
}

/** @param {string} name */
async function isInstalled(name) {
  const { code, output } = await run('dpkg-query', ['-W', '-f=${Status}', name])
  return code === 0 && output.includes('install ok installed')
}
