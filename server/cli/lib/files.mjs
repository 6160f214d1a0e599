import { closeSync, fsyncSync, openSync, readFileSync, renameSync, writeSync } from 'node:fs'

/**
 * Writes a file so that a reader, or a start after a crash, sees the old or the new content and never a part.
 *
 * @param {string} file
 * @param {string} content
 * @param {number} [mode]
 */
export function writeWhole(file, content, mode = 0o644) {
  const draft = `${file}.${process.pid}.new`
  const handle = openSync(draft, 'w', mode)
  writeSync(handle, content)
  fsyncSync(handle)
  closeSync(handle)
  renameSync(draft, file)
}

/**
 * @param {string} file
 * @returns {string | undefined} its text, or undefined if it cannot be read
 */
export function readIfThere(file) {
  try {
    return readFileSync(file, 'utf8')
  }
  catch {
    return undefined
  }
}
