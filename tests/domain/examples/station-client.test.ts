import { mkdtempSync, readFileSync, readdirSync, rmSync, writeFileSync } from 'node:fs'
import type { Server } from 'node:http'
import { createServer } from 'node:http'
import type { AddressInfo } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import { desc, eq } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { stationReports, tableRevisions } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { rotateSigningKey } from '~~/server/domain/tables/rotate-signing-key'
import { withdrawTable } from '~~/server/domain/tables/withdraw-table'
import { StationClient } from '../../examples/station-client.mjs'
import type { FeedServer } from '../../support/feed-server'
import { startFeed } from '../../support/feed-server'
import { addActor } from '../../support/fixtures'

// The reference client against the server's own handlers, with what stands between them made to fail.
let feed: FeedServer
let between: Server
let url: string
let folder: string
let administrator: PersonActor
let spoil: ((path: string, body: string) => { status?: number, body?: string, headers?: Record<string, string> } | null) | null
let asked: { path: string, status: number }[]
const key = `nb_${'a'.repeat(40)}`
interface Row { frequencyHz: number }
interface Table { id: string, revision: number }
let applied: [number, number][]
let said: string[]

beforeAll(async () => {
  feed = await startFeed()
  administrator = await addActor(feed.db, ['administrator'])
  await feed.addKey(feed.station.id, key)
  between = createServer((request, response) => {
    void (async () => {
      const body = await new Promise<string>((resolve) => {
        let text = ''
        request.on('data', (chunk: Buffer) => { text += chunk.toString() }).on('end', () => resolve(text))
      })
      const { host: _host, connection: _connection, ...headers } = request.headers as Record<string, string>
      const answer = await fetch(`${feed.url}${request.url}`, { method: request.method, headers, body: body || undefined })
      const text = await answer.text()
      const spoilt = spoil?.(request.url!, text) ?? null
      asked.push({ path: `${request.method} ${request.url!.replace('/api/station/v1', '')}`, status: spoilt?.status ?? answer.status })
      response.writeHead(spoilt?.status ?? answer.status, { ...(answer.headers.get('etag') ? { etag: answer.headers.get('etag')! } : {}), 'content-type': answer.headers.get('content-type') ?? 'text/plain', ...spoilt?.headers })
      response.end(spoilt?.body ?? text)
    })()
  })
  await new Promise<void>(resolve => between.listen(0, '127.0.0.1', resolve))
  url = `http://127.0.0.1:${(between.address() as AddressInfo).port}`
})
afterAll(async () => {
  between.closeAllConnections()
  between.close()
  await feed.close()
})
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'tables-'))
  spoil = null
  asked = []
  applied = []
  said = []
  return () => rmSync(folder, { recursive: true, force: true })
})

let clock = 0
const client = (more: object = {}) => new StationClient({
  url, key, folder, log: (text: string) => said.push(text), now: () => clock || feed.now.getTime(),
  apply: (row: Row, table: Table) => applied.push([table.revision, row.frequencyHz]), ...more,
})
const retunesAt = (...offsetsS: [number, number][]) => (aos: Date) => offsetsS.map(([offsetS, frequencyHz]) => ({
  at: new Date(aos.getTime() + offsetS * 1000).toISOString(), frequencyHz, slopeHzPerS: 0, dopplerHz: 0, rangeRateMps: 0, azimuthDeg: 0, elevationDeg: 10, residualMinHz: 0, residualMaxHz: 0, lossDb: 0,
}))
let hours = 100
/** A table of three rows: at AOS, and 100 and 200 s after it. */
async function published() {
  const aos = new Date(feed.now.getTime() + ++hours * 3600_000)
  const table = await feed.publish({ retunes: retunesAt([0, 437_510_000], [100, 437_505_000], [200, 437_500_000])(aos) }, aos)
  return { ...table, aos, file: join(folder, `${table.id}.json`) }
}
const reportsOf = async (tableId: string) => (await feed.db.select({ outcome: stationReports.outcome, reason: stationReports.reason, revision: tableRevisions.number }).from(stationReports)
  .innerJoin(tableRevisions, eq(tableRevisions.id, stationReports.revisionId)).where(eq(tableRevisions.tableId, tableId)).orderBy(desc(stationReports.at)))
const fetches = (id: string) => asked.filter(({ path }) => path === `GET /tables/${id}`).map(({ status }) => status)

describe('the reference client', () => {
  it('fetches what is new once, keeps it whole on disk, reports it loaded, and asks by tag from then on', async () => {
    const table = await published()
    const station = client()
    await station.poll()
    // That it was collected stands in the list, behind the answer: one poll more has it.
    await wait(400)
    await station.poll()
    await station.poll()
    await station.poll()
    expect(fetches(table.id)).toEqual([200])
    expect(asked.filter(({ path }) => path.startsWith('GET /tables?')).map(({ status }) => status).slice(-2)).toEqual([304, 304])
    expect(JSON.parse(readFileSync(table.file, 'utf8'))).toMatchObject({ id: table.id, revision: 1, retunes: [{ frequencyHz: 437_510_000 }, {}, {}] })
    expect(await reportsOf(table.id)).toEqual([{ revision: 1, outcome: 'loaded', reason: null }])
    expect(readdirSync(folder).filter(name => name.endsWith('.new'))).toEqual([])
  })

  it('applies each row once, at its instant, and nothing after LOS', async () => {
    const { aos } = await published()
    const station = client()
    await station.poll()
    const at = (offsetS: number) => {
      clock = aos.getTime() + offsetS * 1000
      return station.applyDue()
    }
    expect(at(-1)).toBe(aos.getTime())
    expect(applied).toEqual([])
    expect(at(0)).toBe(aos.getTime() + 100_000)
    at(50)
    at(99.999)
    expect(applied).toEqual([[1, 437_510_000]])
    // Asleep over a row: the newest counts.
    at(205)
    expect(applied).toEqual([[1, 437_510_000], [1, 437_500_000]])
    at(3600)
    expect(applied).toHaveLength(2)
    clock = 0
  })

  it('goes on from its disk after a restart in the middle of a pass, without the server', async () => {
    const { aos, file } = await published()
    await client().poll()
    spoil = () => ({ status: 503 })
    const again = client()
    clock = aos.getTime() + 150_000
    again.applyDue()
    expect(applied).toEqual([[1, 437_505_000]])
    // A file that was changed meanwhile is not used.
    writeFileSync(file, readFileSync(file, 'utf8').replace('437505000', '437505001'))
    applied = []
    client().applyDue()
    expect(applied).toEqual([])
    expect(said.at(-1)).toMatch(/is not used: The digest is not that of the table/)
    clock = 0
  })

  it('takes a newer revision in place of the one it has, in the middle of the pass too', async () => {
    const table = await published()
    const station = client()
    await station.poll()
    clock = table.aos.getTime() + 110_000
    station.applyDue()
    await feed.republish(table, 2, { retunes: retunesAt([0, 437_511_000], [100, 437_506_000])(table.aos) })
    await station.poll()
    station.applyDue()
    expect(applied).toEqual([[1, 437_505_000], [2, 437_506_000]])
    expect(await reportsOf(table.id)).toContainEqual({ revision: 2, outcome: 'loaded', reason: null })
    clock = 0
  })

  it('drops what was withdrawn: nothing more of it is applied, here or after a restart', async () => {
    const table = await published()
    const station = client()
    await station.poll()
    await withdrawTable({ db: feed.db, now: feed.now, actor: administrator }, { id: table.id, reason: 'Wrong antenna.' })
    await station.poll()
    clock = table.aos.getTime() + 150_000
    station.applyDue()
    client().applyDue()
    expect(applied).toEqual([])
    clock = 0
  })

  it('refuses a table that does not verify with the reason, keeps the one before, and asks for the spoilt one no more', async () => {
    const table = await published()
    const station = client()
    await station.poll()
    await feed.republish(table, 2)
    spoil = (path, body) => path.endsWith(table.id) ? { body: body.replace('"verdict":"holds"', '"verdict":"tight"') } : null
    await station.poll()
    await station.poll()
    expect(fetches(table.id)).toEqual([200, 200])
    expect(await reportsOf(table.id)).toContainEqual({ revision: 2, outcome: 'refused', reason: 'The digest is not that of the table.' })
    expect(JSON.parse(readFileSync(table.file, 'utf8'))).toMatchObject({ revision: 1 })
  })

  it('refuses what the station says it cannot do, in its own words', async () => {
    const table = await published()
    await client({ accept: (given: Table) => given.id === table.id ? 'The synthesiser ends at 437.5 MHz.' : null }).poll()
    expect(await reportsOf(table.id)).toEqual([{ revision: 1, outcome: 'refused', reason: 'The synthesiser ends at 437.5 MHz.' }])
  })

  it('refuses another table under this one’s address, and an older revision after a newer one', async () => {
    const [table, other] = [await published(), await published()]
    const first = await (await fetch(`${feed.url}/api/station/v1/tables/${table.id}`, { headers: { authorization: `Bearer ${key}` } })).text()
    const stranger = await (await fetch(`${feed.url}/api/station/v1/tables/${other.id}`, { headers: { authorization: `Bearer ${key}` } })).text()
    const station = client()
    await feed.republish(table, 2)
    await station.poll()
    await feed.republish(table, 3)
    spoil = path => path.endsWith(table.id) ? { body: first } : null
    await station.poll()
    expect(said).toContainEqual(expect.stringMatching(/revision 1 refused: Revision 2 is held, which is newer/))
    await feed.republish(table, 4)
    spoil = path => path.endsWith(table.id) ? { body: stranger } : null
    await station.poll()
    expect(said).toContainEqual(expect.stringMatching(/refused: This is table/))
    expect(JSON.parse(readFileSync(table.file, 'utf8'))).toMatchObject({ revision: 2 })
  })

  it('fetches the keys again when a new one signs', async () => {
    const station = client()
    await published()
    await station.poll()
    await rotateSigningKey({ db: feed.db, now: feed.now, actor: administrator })
    const after = await published()
    await station.poll()
    expect(await reportsOf(after.id)).toEqual([{ revision: 1, outcome: 'loaded', reason: null }])
    expect(asked.filter(({ path }) => path === 'GET /keys')).toHaveLength(2)
  })

  it('begins anew after a failure half-way, and loses no table and no report', async () => {
    const [one, two] = [await published(), await published()]
    const station = client()
    spoil = path => path.endsWith(two.id) || path.endsWith('/report') ? { status: 503, headers: { 'retry-after': '7' } } : null
    await expect(station.poll()).rejects.toMatchObject({ retryAfterS: 7 })
    spoil = path => path.endsWith('/report') ? { status: 500 } : null
    await expect(station.poll()).rejects.toThrow(/answered 500/)
    spoil = null
    await station.poll()
    for (const { id } of [one, two]) expect((await reportsOf(id)).map(({ outcome }) => outcome)).toEqual(['loaded'])
  })

  it('polls and applies by itself until it is stopped, waiting longer while the server fails', async () => {
    const stop = new AbortController()
    let polls = 0
    spoil = (path) => {
      if (path.includes('/tables?') && ++polls === 4) stop.abort()
      return { status: 503 }
    }
    const began = Date.now()
    await client().run({ pollS: 0.05, signal: stop.signal })
    // 0.05 s doubled three times, each by half at least: 0.05 + 0.1 + 0.2.
    expect(Date.now() - began).toBeGreaterThan(340)
    expect(said.filter(text => text.startsWith('Not polled'))).toHaveLength(4)
  })
})
