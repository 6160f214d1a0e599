import { accessSync, constants, readdirSync } from 'node:fs'
import { delimiter, join } from 'node:path'
import { spawnSync } from 'node:child_process'
import { canInstall, install, refuseMainCluster } from './apt.mjs'
import { fetchPostgres } from './postgres-packages.mjs'
import { dataFolder } from './paths.mjs'
import { Refusal } from './say.mjs'

/**
 * @typedef {object} PostgresPrograms
 * @property {string} bin the folder of postgres and initdb
 * @property {number} major
 * @property {Record<string, string>} env what they need in their environment
 */

const leastMajor = 14

/** The folders that shared libraries of unpacked packages lie in. @param {string} base */
export function libraryFolders(base) {
  const triplet = { x64: 'x86_64-linux-gnu', arm64: 'aarch64-linux-gnu' }[process.arch] ?? `${process.arch}-linux-gnu`
  return ['usr/lib', 'lib'].flatMap(folder => [join(base, folder, triplet), join(base, folder)])
}

/**
 * @param {string} bin
 * @param {Record<string, string>} [env]
 * @returns {PostgresPrograms | undefined} undefined unless both programs are there and run
 */
function programsIn(bin, env = {}) {
  try {
    accessSync(join(bin, 'postgres'), constants.X_OK)
    accessSync(join(bin, 'initdb'), constants.X_OK)
  }
  catch {
    return undefined
  }
  const options = /** @type {const} */ ({ encoding: 'utf8', env: { ...process.env, ...env } })
  const version = spawnSync(join(bin, 'postgres'), ['--version'], options)
  const initdb = spawnSync(join(bin, 'initdb'), ['--version'], options)
  const major = Number(/\b(\d+)\.\d+|\b(\d+)(?:devel|beta|rc)/.exec(version.stdout ?? '')?.[1])
  return version.status === 0 && initdb.status === 0 && major >= leastMajor ? { bin, major, env } : undefined
}

/** @param {string} base */
function versionsBelow(base) {
  try {
    return readdirSync(base).filter(name => /^\d+$/.test(name)).sort((a, b) => Number(b) - Number(a)).map(name => join(base, name, 'bin'))
  }
  catch {
    return []
  }
}

/**
 * The newest PostgreSQL server programs on this machine or unpacked in the checkout.
 *
 * @param {{ major?: number, packages?: string }} [wanted] major: only that one, since a cluster is tied to it
 * @returns {PostgresPrograms | undefined}
 */
export function findPostgres({ major, packages = join(dataFolder, 'packages') } = {}) {
  const onPath = (process.env.PATH ?? '').split(delimiter).filter(Boolean)
  const ofSystem = [...versionsBelow('/usr/lib/postgresql'), ...onPath]
  const unpackedEnv = { LD_LIBRARY_PATH: libraryFolders(packages).join(':') }
  for (const [bins, env] of /** @type {[string[], Record<string, string>][]} */ ([[ofSystem, {}], [versionsBelow(join(packages, 'usr/lib/postgresql')), unpackedEnv]])) {
    for (const bin of bins) {
      const programs = programsIn(bin, env)
      if (programs && (major === undefined || programs.major === major)) return programs
    }
  }
  return undefined
}

/**
 * The server programs: found, installed (as root) or unpacked in the checkout (without root).
 *
 * @param {number} [major] of the cluster that is there already
 * @returns {Promise<PostgresPrograms>}
 */
export async function ensurePostgres(major) {
  const found = findPostgres({ major })
  if (found) return found
  const name = major ? `postgresql-${major}` : 'postgresql'
  let reason = ''
  try {
    if (canInstall()) {
      refuseMainCluster()
      await install([name])
    }
    else {
      await fetchPostgres(join(dataFolder, 'packages'), name)
    }
  }
  catch (error) {
    if (!(error instanceof Refusal)) throw error
    reason = `\n\n${error.message}`
  }
  const now = findPostgres({ major })
  if (now) return now
  const kept = major ? ` The database in this checkout was made by PostgreSQL ${major}, so it must be that one.` : ''
  throw new Refusal(`Nullbeat keeps its data in PostgreSQL (${leastMajor} or later), and its server programs were not found.${kept}\nInstall them (on Debian: sudo apt-get install ${name}), or give the address of a server in DATABASE_URL.${reason}`)
}

/**
 * @param {PostgresPrograms} programs
 * @param {string} name
 */
export function programPath(programs, name) {
  return join(programs.bin, name)
}
