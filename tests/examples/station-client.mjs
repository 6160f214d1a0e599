/**
 * A station's controller to start from: Node 20, nothing to install. It polls for the station's tuning tables, verifies
 * and keeps them, applies their rows by the clock, and reports what it did.
 *
 * Before you connect it to a transmitter: transmitting needs a licence and a coordinated frequency. A table is advice to
 * licensed operators, who answer for what they radiate. Your own interlocks and local rules come first: put them between
 * `apply` below and the radio, so that nothing in here can key or tune a transmitter that they forbid. The clock of this
 * machine must be right (NTP); a row is applied by it.
 *
 *   NULLBEAT_URL=https://nullbeat.ops.example NULLBEAT_KEY=nb_… NULLBEAT_FOLDER=/var/lib/tables \
 *   NULLBEAT_COMMAND=/usr/local/bin/set-radio node station-client.mjs
 *
 * The command is run as `set-radio DIRECTION FREQUENCY-HZ SLOPE-HZ-PER-S RADIO` at each row's instant.
 */
import { execFile } from 'node:child_process'
import { mkdirSync, openSync, closeSync, fsyncSync, readFileSync, readdirSync, renameSync, rmSync, writeFileSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import { verifyTable } from './verify-table.mjs'

const longestWaitS = 300
const dayMs = 86_400_000

/**
 * What of a served table is used here.
 *
 * @typedef {{ at: string, frequencyHz: number, slopeHzPerS: number }} Row
 * @typedef {{ id: string, revision: number, retunes: Row[], pass: { los: string, spacecraft: { name: string } }, link: { name: string, direction: 'uplink' | 'downlink' }, radio: { name: string } }} Table
 */

export class StationClient {
  /** What is held, by table: `{ text, table, appliedRow }`. */
  held = new Map()
  #listTag = null
  #keys = { keys: [] }
  #reports = []
  /** Digests that were refused, so that each is fetched and reported once. */
  #refused = new Set()

  /**
   * @param {object} options
   * @param {string} options.url of the server, without a slash at its end
   * @param {string} options.key of scope `station`
   * @param {string} options.folder where tables are kept
   * @param {(row: Row, table: Table) => unknown} options.apply sets the radio; your interlocks belong in it
   * @param {(table: Table) => string | null} [options.accept] a reason to refuse a table, such as a frequency the radio cannot make
   * @param {(text: string) => void} [options.log]
   * @param {() => number} [options.now] UTC, milliseconds
   */
  constructor({ url, key, folder, apply, accept = () => null, log = console.log, now = Date.now }) {
    Object.assign(this, { url, key, folder, apply, accept, log, now })
    mkdirSync(folder, { recursive: true })
    this.#readFolder()
  }

  /** One round: what changed is fetched, verified, kept and reported; what was withdrawn is dropped. Throws where the server cannot be used. */
  async poll() {
    const list = await this.#changedList()
    for (const item of list?.items ?? []) {
      if (item.state === 'withdrawn') this.#drop(item.id, 'was withdrawn')
      else if (this.held.get(item.id)?.digest !== item.digest && !this.#refused.has(item.digest)) await this.#fetchTable(item.id)
    }
    await this.#sendReports()
    this.#forgetPast()
    // Only once all of it has been dealt with: after a failure the next round begins anew.
    if (list) this.#listTag = list.tag
  }

  /** Applies what is due: of each table its newest row that the clock has passed, once; nothing after LOS. Gives when to look again. */
  applyDue() {
    const now = this.now()
    let next = Infinity
    for (const entry of this.held.values()) {
      const { table } = entry
      if (now > Date.parse(table.pass.los)) continue
      const row = table.retunes.findLastIndex(retune => Date.parse(retune.at) <= now)
      if (row > entry.appliedRow) {
        entry.appliedRow = row
        try {
          this.apply(table.retunes[row], table)
        }
        catch (error) {
          this.log(`${table.pass.spacecraft.name}, ${table.link.name}: a row was not applied: ${error.message}`)
        }
      }
      if (row + 1 < table.retunes.length) next = Math.min(next, Date.parse(table.retunes[row + 1].at))
    }
    return next
  }

  /**
   * Polls and applies until the signal says stop. Errors are waited out, longer each time; rows go on from what is held.
   *
   * @param {{ pollS?: number, signal?: AbortSignal }} [options]
   */
  async run({ pollS = 15, signal } = {}) {
    const stopped = () => signal?.aborted ?? false
    const pause = ms => wait(Math.max(0, ms), undefined, { signal }).catch(() => {})
    const polling = async () => {
      for (let failures = 0; !stopped();) {
        let waitS = pollS
        try {
          await this.poll()
          failures = 0
        }
        catch (error) {
          failures += 1
          waitS = error.retryAfterS ?? Math.min(longestWaitS, pollS * 2 ** failures) * (0.5 + Math.random() / 2)
          this.log(`Not polled (${error.message}); again in ${waitS.toFixed(1)} s with ${this.held.size} tables held.`)
        }
        await pause(waitS * 1000)
      }
    }
    const applying = async () => {
      // Looked at once a second besides, since a poll may bring an earlier row.
      while (!stopped()) await pause(Math.min(1000, this.applyDue() - this.now()))
    }
    await Promise.all([polling(), applying()])
  }

  async #request(path, { method = 'GET', headers = {}, body } = {}) {
    const response = await fetch(`${this.url}/api/station/v1${path}`, { method, headers: { authorization: `Bearer ${this.key}`, accept: 'application/json', ...headers }, body, signal: AbortSignal.timeout(30_000) })
    if (response.ok || [304, 404, 410, 422].includes(response.status)) return response
    const error = new Error(`${method} ${path} answered ${response.status}`)
    const retryAfterS = Number(response.headers.get('retry-after'))
    throw retryAfterS > 0 ? Object.assign(error, { retryAfterS }) : error
  }

  /** All tables of the station with the list's tag, or null where nothing has changed since. */
  async #changedList() {
    const items = []
    let tag = null
    for (let cursor = ''; cursor !== null;) {
      const response = await this.#request(`/tables?limit=1000${cursor && `&cursor=${encodeURIComponent(cursor)}`}`, { headers: this.#listTag && !cursor ? { 'if-none-match': this.#listTag } : {} })
      if (response.status === 304) return null
      const page = await response.json()
      items.push(...page.items)
      // A tag stands for one page: with several the list is read each time.
      tag = cursor === '' && page.nextCursor === null ? response.headers.get('etag') : null
      cursor = page.nextCursor
    }
    return { items, tag }
  }

  async #fetchTable(id) {
    const held = this.held.get(id)
    const response = await this.#request(`/tables/${id}`, { headers: held ? { 'if-none-match': `"${held.digest}-json"` } : {} })
    if (response.status === 410) return this.#drop(id, 'was withdrawn')
    if (response.status !== 200) return
    const text = await response.text()
    const { revision, digest } = JSON.parse(text)
    try {
      const table = await this.#verified(text)
      if (table.id !== id) throw new Error(`This is table ${table.id}.`)
      if (held && revision < held.table.revision) throw new Error(`Revision ${held.table.revision} is held, which is newer.`)
      const reason = this.accept(table)
      if (reason) throw new Error(reason)
      this.#write(`${id}.json`, text)
      this.held.set(id, { digest, table, appliedRow: -1 })
      this.log(`${table.pass.spacecraft.name}, ${table.link.name}: revision ${revision} loaded${held ? ` in place of ${held.table.revision}` : ''}.`)
      this.#reports.push({ id, body: { revision, outcome: 'loaded' } })
    }
    catch (error) {
      // The former revision stays: whether it may still be used is for people to say, who are told by the report.
      this.#refused.add(digest)
      this.log(`${id}: revision ${revision} refused: ${error.message}`)
      this.#reports.push({ id, body: { revision, outcome: 'refused', reason: error.message.slice(0, 500) } })
    }
  }

  /** Keys are fetched again where one is not known: the server may have a new one. */
  async #verified(text) {
    try {
      return verifyTable(text, this.#keys)
    }
    catch {
      this.#keys = await (await this.#request('/keys')).json()
      this.#write('keys.json', JSON.stringify(this.#keys))
      return verifyTable(text, this.#keys)
    }
  }

  async #sendReports() {
    while (this.#reports.length > 0) {
      const { id, body } = this.#reports[0]
      await this.#request(`/tables/${id}/report`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify(body) })
      this.#reports.shift()
    }
  }

  #drop(id, why) {
    rmSync(join(this.folder, `${id}.json`), { force: true })
    if (this.held.delete(id)) this.log(`${id} ${why}: dropped. Nothing more of it is applied.`)
  }

  #forgetPast() {
    for (const [id, { table }] of this.held) if (Date.parse(table.pass.los) < this.now() - dayMs) this.#drop(id, 'is past')
  }

  /** Whole or not at all: written beside, forced to the disk, then renamed. */
  #write(name, text) {
    const path = join(this.folder, name)
    const file = openSync(`${path}.new`, 'w')
    try {
      writeFileSync(file, text)
      fsyncSync(file)
    }
    finally {
      closeSync(file)
    }
    renameSync(`${path}.new`, path)
  }

  /** What was kept before a restart, verified anew. */
  #readFolder() {
    const names = readdirSync(this.folder).filter(name => name.endsWith('.json'))
    if (names.includes('keys.json')) this.#keys = JSON.parse(readFileSync(join(this.folder, 'keys.json'), 'utf8'))
    for (const name of names.filter(name => name !== 'keys.json')) {
      try {
        const text = readFileSync(join(this.folder, name), 'utf8')
        const table = verifyTable(text, this.#keys)
        this.held.set(table.id, { digest: JSON.parse(text).digest, table, appliedRow: -1 })
      }
      catch (error) {
        this.log(`${name} is not used: ${error.message}`)
      }
    }
  }
}

if (process.argv[1]?.endsWith('/station-client.mjs')) {
  const { NULLBEAT_URL: url, NULLBEAT_KEY: key, NULLBEAT_FOLDER: folder = 'tables', NULLBEAT_COMMAND: command } = process.env
  const apply = (row, table) => {
    console.log(`${row.at} ${table.link.direction} ${row.frequencyHz} Hz ${row.slopeHzPerS} Hz/s for ${table.pass.spacecraft.name}, revision ${table.revision}`)
    if (command) execFile(command, [table.link.direction, String(row.frequencyHz), String(row.slopeHzPerS), table.radio.name], error => error && console.error(`${command} failed: ${error.message}`))
  }
  const ending = new AbortController()
  for (const signal of ['SIGINT', 'SIGTERM']) process.once(signal, () => ending.abort())
  await new StationClient({ url, key, folder, apply }).run({ signal: ending.signal })
}
