import { randomBytes, randomInt } from 'node:crypto'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { writeWhole } from './files.mjs'
import { Refusal } from './say.mjs'

/**
 * @typedef {object} Secrets
 * @property {string} clusterPassword of the cluster's superuser
 * @property {string} databasePassword of the product's own role
 * @property {string} sessionSecret
 * @property {string} demoPassword
 */

/** A password that can be read out and typed: five groups of four letters and digits, about 100 bits. */
function readablePassword() {
  const letters = 'abcdefghjkmnpqrstuvwxyz23456789'
  const group = () => Array.from({ length: 4 }, () => letters[randomInt(letters.length)]).join('')
  return Array.from({ length: 5 }, group).join('-')
}

/**
 * The secrets of this installation, made at the first call and kept, readable by their owner only.
 *
 * @param {string} folder
 * @returns {Secrets}
 */
export function keepSecrets(folder) {
  const file = join(folder, 'secrets.json')
  /** @type {Partial<Secrets>} */
  let kept = {}
  try {
    kept = JSON.parse(readFileSync(file, 'utf8'))
  }
  catch (error) {
    const code = /** @type {NodeJS.ErrnoException} */ (error).code
    if (code !== 'ENOENT') throw new Refusal(`${file} cannot be read (${code ?? 'it is not JSON'}). Restore it from a copy; without it the database in this checkout stays locked.`)
  }
  const secrets = {
    clusterPassword: randomBytes(24).toString('base64url'),
    databasePassword: randomBytes(24).toString('base64url'),
    sessionSecret: randomBytes(36).toString('base64url'),
    demoPassword: readablePassword(),
    ...kept,
  }
  if (Object.keys(kept).length < Object.keys(secrets).length) writeWhole(file, `${JSON.stringify(secrets, null, 2)}\n`, 0o600)
  return secrets
}
