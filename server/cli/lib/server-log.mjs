import { createWriteStream, renameSync, statSync } from 'node:fs'
import { createInterface } from 'node:readline'

const largest = 20_000_000

/**
 * Keeps what a server prints: all of it in a file (the one before it is kept too), the last lines in memory,
 * and what a person must see on the screen.
 */
export class ServerLog {
  /** @type {string[]} */
  #last = []
  #written = 0
  #file
  #stream

  /** @param {string} file */
  constructor(file) {
    this.#file = file
    this.#stream = this.#open()
  }

  #open() {
    if (statSync(this.#file, { throwIfNoEntry: false })?.size) renameSync(this.#file, `${this.#file}.1`)
    this.#written = 0
    return createWriteStream(this.#file, { mode: 0o600 }).on('error', () => { /* a full disk must not end the server */ })
  }

  /**
   * @param {import('node:stream').Readable | null} stream
   * @param {(line: string) => boolean} onLine whether the line may be kept: one that holds a secret may not
   */
  follow(stream, onLine) {
    if (!stream) return
    createInterface({ input: stream }).on('line', (line) => {
      if (onLine(line)) this.#keep(line)
    })
  }

  /** @param {string} line */
  #keep(line) {
    this.#last.push(line)
    if (this.#last.length > 200) this.#last.shift()
    this.#written += line.length + 1
    if (this.#written > largest) {
      this.#stream.end()
      this.#stream = this.#open()
    }
    this.#stream.write(`${line}\n`)
  }

  /** @param {number} count */
  tail(count) {
    return this.#last.slice(-count).join('\n')
  }
}

/**
 * Whether a line of the server's log is a warning or worse, or no structured line at all.
 *
 * @param {string} line
 * @returns {boolean}
 */
export function needsAttention(line) {
  try {
    return JSON.parse(line).level >= 40
  }
  catch {
    return /\b(warn|error|fatal)/i.test(line)
  }
}
