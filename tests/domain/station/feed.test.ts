import { createHash } from 'node:crypto'
import { connect } from 'node:net'
import { setTimeout as wait } from 'node:timers/promises'
import { eq } from 'drizzle-orm'
import { flattenedVerify, importJWK } from 'jose'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { alerts, audit, mails, stationReports, tableRevisions } from '../../../server/database/schema'
import type { FeedServer } from '../../support/feed-server'
import { startFeed } from '../../support/feed-server'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { readTdm } from '../../unit/formats/tdm-reader'
import { addPass, addPerson, addRevision, addStation, addTable } from '../../support/fixtures'

// The feed over a real connection. Conditional requests and negotiation: RFC 9110, sections 12.5.1, 13.1.2 and 15.4.5.
let feed: FeedServer
let url: string
let now: Date
let craft: SpacecraftFixture
let station: StationFixture
let publish: FeedServer['publish']
const key = { own: `nb_${'a'.repeat(40)}`, other: `nb_${'b'.repeat(40)}` }
const db = () => feed.db

beforeAll(async () => {
  feed = await startFeed({ name: '=North "Cove", first' })
  url = `${feed.url}/api/station/v1`
  ;({ now, craft, station, publish } = feed)
  await feed.addKey(station.id, key.own)
  await feed.addKey((await addStation(db())).id, key.other)
  await addPerson(db(), ['on-call'])
})
afterAll(() => feed.close())

const get = (path: string, headers: Record<string, string> = {}, bearer = key.own, method = 'GET') => fetch(`${url}${path}`, { method, headers: { authorization: `Bearer ${bearer}`, ...headers } })
const revisionOf = async (tableId: string) => (await db().select().from(tableRevisions).where(eq(tableRevisions.tableId, tableId)))[0]!
/** The mark is made behind the answer. */
async function stateSoon(tableId: string, state: string) {
  for (let tries = 0; tries < 40 && (await revisionOf(tableId)).state !== state; tries++) await wait(25)
  return (await revisionOf(tableId)).state
}
/** Longer than a mark takes. */
const settle = () => wait(400)
const collections = async (tableId: string) => (await db().select().from(audit).where(eq(audit.tableId, tableId))).filter(({ action }) => action === 'table.collect').length

describe('fetching a table', () => {
  let table: Awaited<ReturnType<typeof publish>>
  beforeEach(async () => {
    table = await publish()
  })

  it('gives the signed JSON, whose digest and signature hold by another program, and marks it collected once', async () => {
    const response = await get(`/tables/${table.id}`)
    const text = await response.text()
    expect(response.status).toBe(200)
    const { digest, signature, ...published } = JSON.parse(text) as Record<string, unknown> & { digest: string, signature: string }
    const [row] = await db().select().from(tableRevisions).where(eq(tableRevisions.tableId, table.id))
    const payload = Buffer.from(row!.canonical!, 'utf8')
    expect(JSON.parse(row!.canonical!)).toEqual(published)
    expect(createHash('sha256').update(payload).digest('hex')).toBe(digest)
    const { keys } = await (await get('/keys')).json() as { keys: [{ kty: string, crv: string, x: string, kid: string, alg: string, use: string }] }
    const [header, , mark] = signature.split('.') as [string, string, string]
    await expect(flattenedVerify({ protected: header, signature: mark, payload: payload.toString('base64url') }, await importJWK(keys[0], 'EdDSA'))).resolves.toBeTruthy()
    await expect(flattenedVerify({ protected: header, signature: mark, payload: Buffer.from(`${payload.toString()} `).toString('base64url') }, await importJWK(keys[0], 'EdDSA'))).rejects.toThrow()
    expect(Object.keys(keys[0]).sort()).toEqual(['alg', 'crv', 'kid', 'kty', 'use', 'x'])
    expect(response.headers.get('etag')).toBe(`"${digest}-json"`)
    expect(response.headers.get('table-digest')).toBe(`sha-256=${digest}`)
    expect(response.headers.get('table-signature')).toBe(signature)
    expect(response.headers.get('vary')).toMatch(/accept/i)
    expect(response.headers.get('cache-control')).toBe('private, no-cache')
    expect(await stateSoon(table.id, 'collected')).toBe('collected')
    await (await get(`/tables/${table.id}`)).text()
    await settle()
    expect(await collections(table.id)).toBe(1)
  })

  it('gives CSV with the same figures, another tag, and text that no spreadsheet takes for a formula', async () => {
    const json = await (await get(`/tables/${table.id}`)).json() as { retunes: { at: string, frequencyHz: number, lossDb: number }[], digest: string }
    const response = await get(`/tables/${table.id}`, { accept: 'text/csv' })
    expect(response.headers.get('content-type')).toBe('text/csv; charset=utf-8')
    expect(response.headers.get('etag')).toBe(`"${json.digest}-csv"`)
    const [head, first] = (await response.text()).split('\r\n') as [string, string]
    expect(first).toContain('"\'=North ""Cove"", first"')
    const cells = [...first.matchAll(/("(?:[^"]|"")*"|[^,]*)(?:,|$)/g)].map(match => match[1]!)
    const cell = (name: string) => cells[head.split(',').indexOf(name)]
    expect([cell('at'), Number(cell('frequencyHz')), Number(cell('lossDb')), cell('digest')]).toEqual([json.retunes[0]!.at, json.retunes[0]!.frequencyHz, json.retunes[0]!.lossDb, json.digest])
  })

  it('gives a Tracking Data Message with the same rows, marked as a plan, with digest and signature in it and beside it', async () => {
    const json = await (await get(`/tables/${table.id}`)).json() as { retunes: { frequencyHz: number }[], digest: string, signature: string }
    const response = await get(`/tables/${table.id}`, { accept: 'text/plain' })
    expect([response.headers.get('content-type'), response.headers.get('etag'), response.headers.get('table-signature'), response.headers.get('table-digest')])
      .toEqual(['text/plain; charset=utf-8', `"${json.digest}-tdm"`, json.signature, `sha-256=${json.digest}`])
    const message = readTdm(await response.text())
    expect(message.comments.header).toEqual(expect.arrayContaining([expect.stringMatching(/^PLAN, NOT A MEASUREMENT/), `Digest ${json.digest}`, `Signature ${json.signature}`]))
    expect(message.records.map(({ value }) => value)).toEqual(json.retunes.map(({ frequencyHz }) => frequencyHz))
  })

  it('answers 304 to the tag of the same notation, which collects; * and other tags do not', async () => {
    const { digest } = await revisionOf(table.id)
    for (const [headers, status] of [[{ 'if-none-match': '*' }, 304], [{ 'accept': 'text/csv', 'if-none-match': '"something-else"' }, 200]] as const) {
      const response = await get(`/tables/${table.id}`, headers, key.own, status === 200 ? 'HEAD' : 'GET')
      expect(response.status).toBe(status)
      expect(await response.text()).toBe('')
    }
    await settle()
    expect((await revisionOf(table.id)).state).toBe('published')
    const response = await get(`/tables/${table.id}`, { 'if-none-match': `"older-json", W/"${digest}-json"` })
    expect(response.status).toBe(304)
    expect(response.headers.get('etag')).toBe(`"${digest}-json"`)
    expect(await stateSoon(table.id, 'collected')).toBe('collected')
    expect((await get(`/tables/${table.id}`, { 'accept': 'text/csv', 'if-none-match': `"${digest}-json"` })).status).toBe(200)
  })

  it('chooses by Accept, and says 406 where it has nothing to offer', async () => {
    const typeFor = async (accept: string) => (await get(`/tables/${table.id}`, { accept })).headers.get('content-type')!.split(';')[0]
    expect(await typeFor('*/*')).toBe('application/json')
    expect(await typeFor('text/csv;q=0.9, application/json;q=0.5')).toBe('text/csv')
    expect(await typeFor('application/json;q=0, */*;q=0.1')).toBe('text/csv')
    expect(await typeFor('text/plain')).toBe('text/plain')
    expect((await get(`/tables/${table.id}`, { accept: 'image/png' })).status).toBe(406)
    expect(await typeFor('image/png')).toBe('application/problem+json')
  })

  it('gives 404 to another station’s key, 401 to none, and 410 once it is withdrawn', async () => {
    expect((await get(`/tables/${table.id}`, {}, key.other)).status).toBe(404)
    expect((await get(`/tables/${table.id}`, {}, `nb_${'c'.repeat(40)}`)).status).toBe(401)
    expect((await fetch(`${url}/tables/${table.id}`)).status).toBe(401)
    await db().update(tableRevisions).set({ state: 'withdrawn', reason: 'Wrong antenna.', withdrawnAt: now }).where(eq(tableRevisions.tableId, table.id))
    const gone = await get(`/tables/${table.id}`)
    expect([gone.status, (await gone.json() as { detail: string }).detail]).toEqual([410, 'Revision 1 was withdrawn and must not be used. Reason: Wrong antenna.'])
    const { items } = await (await get('/tables')).json() as { items: { id: string, state: string }[] }
    expect(items.find(({ id }) => id === table.id)).toMatchObject({ state: 'withdrawn' })
    await settle()
    expect(await collections(table.id)).toBe(0)
  })

  it('goes on serving the published revision while a newer one is drafted, and after its pass', async () => {
    await addRevision(db(), craft, station, { tableId: table.id, aos: now, number: 2 })
    expect(await (await get(`/tables/${table.id}`)).json()).toMatchObject({ revision: 1 })
    const past = await publish({}, new Date(now.getTime() + 40 * 3600_000))
    await db().execute(`UPDATE passes SET aos = now() - interval '3 days', culmination = now() - interval '3 days', los = now() - interval '3 days' WHERE id = '${past.passId}'`)
    expect((await get(`/tables/${past.id}`)).status).toBe(200)
    const { items } = await (await get('/tables')).json() as { items: { id: string }[] }
    expect(items.map(({ id }) => id)).not.toContain(past.id)
  })
})

it('does not mark a table collected whose download was broken off', async () => {
  // More than the operating system holds for a reader that has gone.
  const pass = await addPass(db(), craft, station, new Date(now.getTime() + 3600_000))
  const table = await addTable(db(), craft, station, pass, { state: 'published', canonical: JSON.stringify({ padding: 'x'.repeat(24_000_000) }) })
  const socket = connect(Number(new URL(url).port), '127.0.0.1')
  socket.write(`GET /api/station/v1/tables/${table.id} HTTP/1.1\r\nHost: x\r\nAuthorization: Bearer ${key.own}\r\n\r\n`)
  await new Promise(resolve => socket.once('data', resolve))
  socket.destroy()
  await wait(1000)
  expect((await revisionOf(table.id)).state).toBe('published')
  await (await get(`/tables/${table.id}`)).text()
  expect(await stateSoon(table.id, 'collected')).toBe('collected')
})

describe('the list of tables', () => {
  it('holds what the key’s own station was given, by AOS, within the span asked for', async () => {
    const [one, two] = [await publish(), await publish()]
    const drafted = await addTable(db(), craft, station, await addPass(db(), craft, station, new Date(now.getTime() + 3600_000)))
    const { items } = await (await get('/tables')).json() as { items: { id: string, digest: string, eTag: string, pass: { aos: string } }[] }
    const ids = items.map(({ id }) => id)
    expect(ids).toEqual(expect.arrayContaining([one.id, two.id]))
    expect(ids).not.toContain(drafted.id)
    expect(items.map(({ pass }) => pass.aos)).toEqual(items.map(({ pass }) => pass.aos).sort())
    const entry = items.find(({ id }) => id === two.id)!
    expect(entry.eTag).toBe((await get(`/tables/${two.id}`)).headers.get('etag'))
    const span = await (await get(`/tables?from=${entry.pass.aos}&to=${new Date(Date.parse(entry.pass.aos) + 1).toISOString()}`)).json() as { items: { id: string }[] }
    expect(span.items.map(({ id }) => id)).toEqual([two.id])
    expect(await (await get('/tables', {}, key.other)).json()).toEqual({ items: [], nextCursor: null })
  })

  it('comes page by page, and is not sent again to a controller that has it', async () => {
    for (let count = 0; count < 3; count++) await publish()
    type Page = { items: { id: string }[], nextCursor: string | null }
    const whole = await (await get('/tables')).json() as Page
    const ids: string[] = []
    for (let page: Page = { items: [], nextCursor: '' }; page.nextCursor !== null;) {
      page = await (await get(`/tables?limit=2${page.nextCursor && `&cursor=${page.nextCursor}`}`)).json() as Page
      expect(page.items.length).toBeLessThanOrEqual(2)
      ids.push(...page.items.map(({ id }) => id))
    }
    expect(ids).toEqual(whole.items.map(({ id }) => id))
    const tag = (await get('/tables')).headers.get('etag')!
    const again = await get('/tables', { 'if-none-match': tag })
    expect([again.status, await again.text()]).toEqual([304, ''])
    await publish()
    expect((await get('/tables', { 'if-none-match': tag })).status).toBe(200)
  })
})

describe('a station’s report', () => {
  const report = (tableId: string, body: unknown, bearer = key.own) => fetch(`${url}/tables/${tableId}/report`, { method: 'POST', headers: { 'authorization': `Bearer ${bearer}`, 'content-type': 'application/json' }, body: JSON.stringify(body) })

  it('is kept; a refusal raises one alert with its reason at once, and loading it after all closes it', async () => {
    const table = await publish()
    expect((await report(table.id, { revision: 1, outcome: 'refused', reason: 'Frequency outside the synthesiser.' })).status).toBe(204)
    const [alert] = await db().select().from(alerts).where(eq(alerts.kind, 'station-refused'))
    expect(alert).toMatchObject({ state: 'open', severity: 'call', stationId: station.id, detail: expect.stringContaining('Frequency outside the synthesiser.') })
    expect(await db().select().from(mails).where(eq(mails.alertId, alert!.id))).toHaveLength(1)
    expect((await report(table.id, { revision: 1, outcome: 'loaded' })).status).toBe(204)
    expect((await db().select().from(alerts).where(eq(alerts.id, alert!.id)))[0]).toMatchObject({ state: 'closed' })
    expect((await db().select().from(stationReports).where(eq(stationReports.revisionId, table.revision.id))).map(({ outcome }) => outcome).sort()).toEqual(['loaded', 'refused'])
  })

  it('is refused for another station’s table, for what was never published, and without a reason', async () => {
    const table = await publish()
    expect((await report(table.id, { revision: 1, outcome: 'loaded' }, key.other)).status).toBe(404)
    expect((await report(table.id, { revision: 2, outcome: 'loaded' })).status).toBe(422)
    expect((await report(table.id, { revision: 1, outcome: 'refused' })).status).toBe(422)
  })
})
