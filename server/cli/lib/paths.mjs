import { mkdirSync, accessSync, chmodSync, constants, statSync } from 'node:fs'
import { join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { Refusal } from './say.mjs'

/** The folder of the checkout. */
export const root = fileURLToPath(new URL('../../../', import.meta.url)).replace(/\/$/, '')

/** What this installation keeps between starts: the cluster, its secrets, logs. Never in git. */
export const dataFolder = join(root, '.data')

/**
 * Makes the data folder, or says who it belongs to when it cannot be written.
 * Other users may pass through it (the database runs as one when started by root) but not list it.
 *
 * @param {string} [folder]
 * @returns {string} the folder
 */
export function ensureDataFolder(folder = dataFolder) {
  try {
    mkdirSync(folder, { recursive: true, mode: 0o711 })
    accessSync(folder, constants.W_OK | constants.X_OK)
  }
  catch {
    let owner = ''
    try {
      owner = ` It belongs to user id ${statSync(folder).uid}, this is user id ${process.getuid?.()}.`
    }
    catch { /* it does not exist: its parent is closed, which the message covers */ }
    throw new Refusal(`${folder} cannot be written.${owner} Start as the user who made it, or give this user the folder (chown -R).`)
  }
  if (process.getuid?.() === 0) chmodSync(folder, 0o711)
  return folder
}
