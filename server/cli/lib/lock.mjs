import { linkSync, rmSync, writeFileSync } from 'node:fs'
import { readIfThere } from './files.mjs'
import { isRunning } from './processes.mjs'

/**
 * @typedef {object} Holder
 * @property {number} pid
 * @property {string} command a word of the holder's command line
 * @property {string} [note]
 */

/**
 * Takes a lock kept in a file. One whose holder has died, or whose process id now means another program, is taken over.
 *
 * @param {string} file
 * @param {Holder} me
 * @returns {{ held: true, previous?: Holder } | { held: false, by: Holder }} previous: who died holding it
 */
export function takeLock(file, me) {
  const draft = `${file}.${process.pid}`
  writeFileSync(draft, JSON.stringify(me))
  try {
    /** @type {Holder | undefined} */
    let previous
    for (let attempt = 0; attempt < 20; attempt += 1) {
      try {
        // A hard link appears whole or not at all, and fails if the lock is there.
        linkSync(draft, file)
        return previous ? { held: true, previous } : { held: true }
      }
      catch (error) {
        if (/** @type {NodeJS.ErrnoException} */ (error).code !== 'EEXIST') throw error
      }
      const by = holderOf(file)
      if (by && by.pid !== process.pid && isRunning(by.pid, [by.command])) return { held: false, by }
      previous = by ?? previous
      rmSync(file, { force: true })
    }
    throw new Error(`${file} cannot be taken`)
  }
  finally {
    rmSync(draft, { force: true })
  }
}

/**
 * @param {string} file
 * @returns {Holder | undefined} who holds the lock, living or dead
 */
export function holderOf(file) {
  try {
    return JSON.parse(readIfThere(file) ?? '')
  }
  catch {
    return undefined
  }
}

/** @param {string} file */
export function releaseLock(file) {
  if (holderOf(file)?.pid === process.pid) rmSync(file, { force: true })
}

/**
 * Waits for its turn, then does something that two commands must not do at once.
 *
 * @template T
 * @param {string} file
 * @param {string} command a word of this command's line
 * @param {(holder: Holder) => void} onWait called once if another is at it
 * @param {() => Promise<T>} work
 * @returns {Promise<T>}
 */
export async function inTurn(file, command, onWait, work) {
  for (let told = false; ;) {
    const outcome = takeLock(file, { pid: process.pid, command })
    if (outcome.held) break
    if (!told) onWait(outcome.by)
    told = true
    await new Promise(resolve => setTimeout(resolve, 500))
  }
  try {
    return await work()
  }
  finally {
    releaseLock(file)
  }
}
