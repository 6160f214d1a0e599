import { createHash } from 'node:crypto'
import { readdirSync, readFileSync, rmSync, statSync } from 'node:fs'
import { join } from 'node:path'
import { readIfThere, writeWhole } from './files.mjs'

/**
 * SHA-256 over the names and contents of files and folders; what does not exist counts as absent.
 * Dot-files inside folders (an editor's swap file) are left out.
 *
 * @param {string} root
 * @param {string[]} names files or folders below root
 * @param {string[]} [extra] whatever else the outcome depends on
 * @param {string[]} [except] files or folders in them that do not matter
 * @returns {string} in hexadecimal
 */
export function fingerprint(root, names, extra = [], except = []) {
  const hash = createHash('sha256').update(JSON.stringify(extra))
  /** @param {string} name */
  const add = (name) => {
    if (except.includes(name)) return
    const path = join(root, name)
    const stat = statSync(path, { throwIfNoEntry: false })
    if (stat?.isDirectory()) {
      for (const entry of readdirSync(path).filter(entry => !entry.startsWith('.')).sort()) add(`${name}/${entry}`)
    }
    else if (stat?.isFile()) {
      const content = readFileSync(path)
      hash.update(`${name}\0${content.length}\0`).update(content)
    }
  }
  for (const name of [...names].sort()) add(name)
  return hash.digest('hex')
}

/**
 * Does a slow thing only if it was not finished before for the same fingerprint. The marker is taken away first
 * and written last, so a thing that was killed half-way is done again.
 *
 * @param {string} marker the marker's file
 * @param {string} wanted the fingerprint of what it is made from
 * @param {() => Promise<void>} make
 * @returns {Promise<boolean>} whether it had to be made
 */
export async function makeUnlessCurrent(marker, wanted, make) {
  if (isCurrent(marker, wanted)) return false
  rmSync(marker, { force: true })
  await make()
  writeWhole(marker, `${wanted}\n`)
  return true
}

/**
 * @param {string} marker
 * @param {string} wanted
 */
export function isCurrent(marker, wanted) {
  return readIfThere(marker)?.trim() === wanted
}
