import { spawnSync } from 'node:child_process'
import { createHash } from 'node:crypto'
import { chmodSync, existsSync, mkdirSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { step } from './say.mjs'

/** @typedef {{ uid: number, gid: number }} SystemUser */

/**
 * The user that the database runs as. PostgreSQL refuses to run as root, so root hands it to the
 * system's own user for it, or to nobody.
 *
 * @param {string} [folder] the cluster's; if another user owns it, that one
 * @returns {SystemUser | undefined} undefined: whoever runs this
 */
export function clusterUser(folder) {
  if (process.getuid?.() !== 0) return undefined
  const owner = folder ? statSync(folder, { throwIfNoEntry: false }) : undefined
  if (owner && owner.uid !== 0) return { uid: owner.uid, gid: owner.gid }
  for (const name of ['postgres', 'nobody']) {
    const [uid, gid] = ['-u', '-g'].map(flag => Number.parseInt(spawnSync('id', [flag, name], { encoding: 'utf8' }).stdout, 10))
    if (uid > 0 && gid > 0) return { uid, gid }
  }
  return { uid: 65534, gid: 65534 }
}

/**
 * @param {string} folder
 * @param {SystemUser | undefined} user
 * @returns {boolean} whether that user can get into the folder, through all that lie above it
 */
export function canEnter(folder, user) {
  return spawnSync('sh', ['-c', 'cd "$1"', 'sh', folder], { ...user, cwd: '/', stdio: 'ignore' }).status === 0
}

/**
 * Where the cluster lies: in the checkout, or, where its user cannot get in (a checkout under a closed
 * folder, started by root), in /var/lib under a name made from the checkout's path.
 *
 * @param {string} dataFolder
 * @param {{ elsewhere?: string }} [options] elsewhere: instead of /var/lib
 * @returns {{ folder: string, user: SystemUser | undefined }}
 */
export function placeCluster(dataFolder, { elsewhere = '/var/lib' } = {}) {
  const inside = join(dataFolder, 'postgres')
  const user = clusterUser(inside)
  if (canEnter(dataFolder, user)) return { folder: inside, user }
  const outside = join(elsewhere, `nullbeat-${createHash('sha256').update(dataFolder).digest('hex').slice(0, 12)}`)
  if (!existsSync(outside)) step(`The database’s user cannot get into ${dataFolder}: the database is kept in ${outside}`)
  mkdirSync(outside, { recursive: true })
  chmodSync(outside, 0o711)
  return { folder: join(outside, 'postgres'), user: clusterUser(join(outside, 'postgres')) }
}
