import { randomUUID } from 'node:crypto'
import { connect } from 'node:net'
import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { RouteSpec } from '../../shared/routes'
import { routes } from '../../shared/routes'
import type { Database } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import { tableRevisions } from '../../server/database/schema'
import { hashPassword } from '../../server/domain/auth/passwords'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import { addPass, addPerson, addSpacecraft, addStation, addTable } from '../support/fixtures'
import type { TestServer } from '../support/server'
import { startServer } from '../support/server'
import type { Headers } from './actors'
import { addKey, password, signIn } from './actors'

// No bad input gets a 500, and each is answered within a second: common practice (OWASP ASVS, input validation); the shapes are from memory.
let server: TestServer
let made: TestDatabase
let database: Database
let session: Headers
let station: Headers
let ids: Record<string, string>
const published: string[] = []

beforeAll(async () => {
  made = await createTestDatabase()
  database = openDatabase(made.url, { max: 2 })
  server = await startServer({ databaseUrl: made.url, env: { TRUST_PROXY: '1' } })
  const { email } = await addPerson(database.db, ['administrator', 'flight-dynamics', 'operator', 'on-call'], { passwordHash: await hashPassword(password) })
  session = await signIn(server.url, email)
  const place = await addStation(database.db)
  station = await addKey(database.db, 'station', place.id)
  const craft = await addSpacecraft(database.db, new Date())
  const pass = await addPass(database.db, craft, place, new Date(Date.now() + 3600_000))
  const table = await addTable(database.db, craft, place, pass)
  const later = (hours: number) => addPass(database.db, craft, place, new Date(Date.now() + hours * 3600_000))
  for (const hours of [2, 3]) published.push((await addTable(database.db, craft, place, await later(hours), { state: 'published' })).id)
  ids = { 'spacecraft': craft.id, 'links': craft.link.id, 'stations': place.id, 'antennas': place.antenna.id, 'radios': place.radio.id, 'passes': pass.id, 'tables': table.id, 'element-sets': craft.set.id }
})
afterAll(async () => {
  await server?.stop()
  await database?.close()
  await made?.drop()
})

let from = 0
/** Each from another address, so that the throttle, which answers 429, does not stand before what is tried. */
const own = (name: string): Headers => ({ ...(name.includes('/station/v1/') ? station : session), 'x-forwarded-for': `192.0.2.${++from % 256}` })
const realId = (path: string) => ids[path.split('/').findLast(part => part in ids) ?? ''] ?? randomUUID()
const addressOf = (path: string, id = realId(path)) => `${server.url}${path.replace('{id}', id)}`

async function faultOf(name: string, url: string, init: RequestInit): Promise<string | null> {
  const start = performance.now()
  const response = await fetch(url, init)
  const text = await response.text()
  const tookMs = performance.now() - start
  const what = `${name} ${url.slice(server.url.length, server.url.length + 120)} ${String(init.body).slice(0, 80)}`
  if (response.status >= 500) return `${what}: ${response.status} ${text.slice(0, 200)}`
  if (tookMs > 1000) return `${what}: took ${Math.round(tookMs)} ms`
  if (/node_modules|at .*\.m?js:\d|Failed query|select "/.test(text)) return `${what}: shows the server's inside: ${text.slice(0, 200)}`
  return response.status >= 400 && !(response.headers.get('content-type') ?? '').startsWith('application/problem+json') ? `${what}: ${response.status} as ${response.headers.get('content-type')}` : null
}

const atOnce = 8
/** Some at a time: a request is not to wait for a hundred others. */
async function faultsOf(tries: (() => Promise<string | null>)[]): Promise<string[]> {
  const faults: string[] = []
  for (let start = 0; start < tries.length; start += atOnce) {
    for (const fault of await Promise.all(tries.slice(start, start + atOnce).map(attempt => attempt()))) if (fault) faults.push(fault)
  }
  return faults
}

const deep = '['.repeat(100_000) + ']'.repeat(100_000)
/** Bodies as they go over the wire. */
const bodies: (string | Uint8Array<ArrayBuffer>)[] = [
  '', '{', 'null', '[]', '"text"', '1e999', '{}', '\u0000', deep, `{"a":${deep}}`, `{"name":${deep},"reason":${deep}}`,
  '{"__proto__":{"admin":true}}', '{"constructor":{"prototype":{"admin":true}}}', '{"name":"a","name":{"$gt":""},"extra":1}',
  new Uint8Array([0x7B, 0x22, 0xFF, 0xFE, 0x22, 0x3A, 0x31, 0x7D]), new Uint8Array([0xEF, 0xBB, 0xBF, 0x7B, 0x7D]), `{"${'k'.repeat(10_000)}":1}`,
]
/** Values that take the place of every field of every body, by turns. */
const values: unknown[] = ['\u0000', 'a\u0000b', '\uD800', 'x\uDC00y', '', ' ', 'x'.repeat(100_000), '\'; DROP TABLE people; --', '<script>alert(1)</script>', '../../etc/passwd', '=1+1', '\r\nBcc: a@b.example',
  null, true, -1, 0, 1e308, 5e-324, 2 ** 53, 1.5, [], {}, [[]], ['\u0000'], { a: '\u0000' }, '2026-02-30T00:00:00Z', '0000-01-01T00:00:00Z', '9999-12-31T23:59:59-01:00', randomUUID()]
const queryValues = ['', '%00', '%ED%A0%80', '%', '%zz', '0', '-1', '1e9', '1001', 'NaN', '[]', '{}', '\'%20OR%201=1--', '0000-01-01T00:00:00Z', '9999-12-31T23:59:59-01:00', '%F0%9F%9A%80', 'x'.repeat(7000), '..%2f..%2f',
  ...[['a\u0000', randomUUID()], ['a\uD800', randomUUID()], ['0000-01-01T00:00:00.000Z', randomUUID()], ['2026-02-31T00:00:00.000Z', randomUUID()], ['a', 'b\u0000', randomUUID()], [2 ** 60], [null], { length: 2 }].map(key => Buffer.from(JSON.stringify(key)).toString('base64url'))]

interface Shape { shape?: Record<string, unknown>, def?: { innerType?: unknown, in?: unknown, options?: unknown[] }, _zod?: unknown }
/** Names of the fields of a schema, under whatever wraps it. */
function fieldsOf(schema: unknown): string[] {
  const { shape, def } = schema as Shape
  if (shape) return Object.keys(shape)
  const inner = def?.innerType ?? def?.in
  return inner ? fieldsOf(inner) : (def?.options ?? []).flatMap(fieldsOf)
}

const lines = Object.entries(routes) as [keyof typeof routes, RouteSpec][]
const changing = lines.filter(([name, spec]) => !name.startsWith('GET ') && !name.endsWith('/sign-out') && !spec.rawBody)

describe('hostile requests to every route', () => {
  it('are many', () => expect(lines.length * queryValues.length + changing.length * bodies.length).toBeGreaterThan(1000))

  it.each(changing.filter(([, spec]) => spec.body))('with bodies that are none: %s', async (name) => {
    const [method, path] = name.split(' ') as [string, string]
    expect(await faultsOf(bodies.map(body => () => faultOf(name, addressOf(path, randomUUID()), { method, headers: { ...own(name), 'content-type': 'application/json' }, body })))).toEqual([])
  })

  it.each(changing.filter(([, spec]) => spec.body))('with every value in every field: %s', async (name, spec) => {
    const [method, path] = name.split(' ') as [string, string]
    const tries = fieldsOf(spec.body).flatMap(field => values.map((value, index) => () => faultOf(name, addressOf(path), {
      method, body: JSON.stringify({ [field]: value }), headers: { ...own(name), 'content-type': 'application/json', ...(spec.creates ? { 'idempotency-key': `${field}-${index}` } : {}) },
    })))
    expect(await faultsOf(tries)).toEqual([])
  })

  it.each(lines.filter(([name]) => name.startsWith('GET ')))('with queries and addresses that make no sense: %s', async (name, spec) => {
    const path = name.split(' ')[1]!
    const fields = [...fieldsOf(spec.query ?? {}), 'limit', 'nothing', '__proto__', 'constructor[prototype]', 'from[]']
    const addresses = [
      // What takes no query is not computed a hundred times.
      ...[...fields.flatMap(field => queryValues.map(value => `${field}=${value}`)), 'limit=1&limit=2&cursor=a&cursor=b'].map(query => `${addressOf(path, spec.query ? undefined : randomUUID())}?${query}`),
      ...(spec.params ? ['%00', '%E0%A4%A', '..%2f..', '\'', 'x'.repeat(5000), '00000000-0000-0000-0000-000000000000'].map(id => addressOf(path, id)) : []),
    ]
    expect(await faultsOf(addresses.map(address => () => faultOf(name, address, { headers: own(name) })))).toEqual([])
  })

  it.each(['sign-in with a NUL', 'nothing of the kind'])('are refused with the field at fault, not taken for a fault of the server: %s', async (what) => {
    const body = what.startsWith('sign-in') ? { email: 'a\u0000@ops.example', password } : { email: 'nobody@ops.example' }
    const response = await fetch(`${server.url}/api/auth/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-forwarded-for': '198.51.100.1' }, body: JSON.stringify(body) })
    expect(response.status).toBe(422)
    expect(await response.json()).toMatchObject({ type: '/problems/not-valid', errors: [{ path: what.startsWith('sign-in') ? 'email' : 'password' }] })
  })
})

describe('hostile headers and uploads', () => {
  const upload = (headers: Headers, body: BodyInit) => faultOf('upload', `${server.url}/api/element-sets/uploads`, { method: 'POST', headers: { ...session, ...headers }, body })
  it('get no 500 either', async () => {
    const boundary = 'multipart/form-data; boundary=x'
    const part = (name: string) => `--x\r\nContent-Disposition: form-data; name="file"; filename="${name}"\r\nContent-Type: text/plain\r\n\r\nnothing\r\n--x--\r\n`
    const tries = [
      ...['', '\u0000', deep, `[${'{"EPOCH":'.repeat(2000)}`, '<!DOCTYPE x [<!ENTITY a "b">]><omm/>', '1 \u0000', '[{"__proto__":{}}]', 'x'.repeat(900_000), '\n'.repeat(900_000)]
        .flatMap(body => ['text/plain', 'application/json', 'application/xml', 'text/csv'].map(type => () => upload({ 'content-type': type }, body))),
      ...['../../etc/passwd', 'a\u0000b', 'x'.repeat(20_000), '\u202Eexe.txt'].map(name => () => upload({ 'content-type': boundary }, part(name))),
      ...['multipart/form-data', 'multipart/form-data; boundary=', boundary, 'application/x-www-form-urlencoded', 'text/plain; charset=utf-16', 'nonsense'].map(type => () => upload({ 'content-type': type }, 'a=b')),
      ...['', ' ', 'Bearer', 'Bearer x', `Bearer ${'y'.repeat(200)}`, 'Basic YTpi', `Bearer nb_${'\u00E9'.repeat(40)}`].map(authorization => () => faultOf('key', `${server.url}/api/tables`, { headers: { authorization } })),
      ...['nullbeat-session=', 'nullbeat-session=Fe26.2*', `nullbeat-session=${'a'.repeat(6000)}`, '=;;=', '__proto__=1'].map(cookie => () => faultOf('cookie', `${server.url}/api/tables`, { headers: { cookie } })),
      ...['W/', '"', '*', 'x'.repeat(7000), '"a", W/"b"'].map(tag => () => faultOf('tag', `${server.url}/api/station/v1/tables`, { headers: { ...station, 'if-none-match': tag } })),
      ...['', ';q=', 'a/b;q=9', '*/*;q=0', ','.repeat(5000)].map(accept => () => faultOf('accept', addressOf('/api/station/v1/tables/{id}', published[0]), { headers: { ...station, accept } })),
      ...[' ', 'x'.repeat(201), 'x'.repeat(7000)].map(key => () => faultOf('idempotency', `${server.url}/api/stations`, { method: 'POST', headers: { ...session, 'content-type': 'application/json', 'idempotency-key': key }, body: JSON.stringify({ name: 'a', latitudeDeg: 0, longitudeDeg: 0, heightM: 0, zone: 'UTC' }) })),
    ]
    expect(await faultsOf(tries)).toEqual([])
  })

  it('a body far beyond its limit is refused with 413, declared or not, and the server goes on', async () => {
    const send = (body: BodyInit) => fetch(`${server.url}/api/stations`, { method: 'POST', headers: { ...session, 'content-type': 'application/json' }, body, duplex: 'half' } as RequestInit)
    expect((await send('x'.repeat(300 * 1024))).status).toBe(413)
    let left = 40
    expect((await send(new ReadableStream({ pull: controller => left-- > 0 ? controller.enqueue(new Uint8Array(16 * 1024)) : controller.close() }))).status).toBe(413)
    // The rest of what was sent is passed over: the connection serves on.
    expect(await Promise.all(Array.from({ length: 20 }, async () => (await fetch(`${server.url}/api/health/live`)).status))).toEqual(Array.from({ length: 20 }, () => 200))
  })

  it('a request that is no HTTP, and one that is broken off, leave the server up', async () => {
    for (const text of ['\u0000\u0001\u0002', 'GET / HTTP/9.9\r\n\r\n', 'POST /api/stations HTTP/1.1\r\nHost: x\r\nContent-Type: application/json\r\nContent-Length: 100\r\n\r\n{', `GET /${'a'.repeat(100_000)} HTTP/1.1\r\n\r\n`, 'GET /api/tables HTTP/1.1\r\nHost: x\r\nX: a\u0000b\r\n\r\n']) {
      const socket = connect(Number(new URL(server.url).port), '127.0.0.1').on('error', () => {})
      socket.write(text)
      await new Promise(resolve => setTimeout(resolve, 50))
      socket.destroy()
    }
    expect((await fetch(`${server.url}/api/health/live`)).status).toBe(200)
  })
})

describe('a HEAD request', () => {
  it.each(['/api/health/live', '/api/tables', '/api/openapi.json', '/api/stations'])('answers as GET does, without its body: %s', async (path) => {
    const response = await fetch(`${server.url}${path}`, { method: 'HEAD', headers: session })
    expect([response.status, await response.text()]).toEqual([200, ''])
  })

  it('tells a station its table’s tag without counting as collected', async () => {
    const url = addressOf('/api/station/v1/tables/{id}', published[1])
    const response = await fetch(url, { method: 'HEAD', headers: station })
    expect(response.status).toBe(200)
    expect(response.headers.get('etag')).toMatch(/^"d{64}-json"$/)
    await new Promise(resolve => setTimeout(resolve, 300))
    const [revision] = await database.db.select({ state: tableRevisions.state }).from(tableRevisions).where(eq(tableRevisions.tableId, published[1]!))
    expect(revision).toEqual({ state: 'published' })
  })
})

it('has met none of these as a fault: the log holds no error', () => {
  expect(server.log().split('\n').filter(line => line.includes('"level":50'))).toEqual([])
})
