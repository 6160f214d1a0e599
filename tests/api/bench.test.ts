import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Database } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import { idempotencyKeys } from '../../server/database/schema'
import { twoLines } from '../domain/elements/support'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import { referenceDoppler } from '../support/reference-data'
import type { TestServer } from '../support/server'
import { startServer } from '../support/server'
import type { Headers } from './actors'
import { addKey } from './actors'

let server: TestServer
let made: TestDatabase
let database: Database
let reader: Headers
let writer: Headers

beforeAll(async () => {
  made = await createTestDatabase()
  database = openDatabase(made.url, { max: 2 })
  server = await startServer({ databaseUrl: made.url })
  reader = await addKey(database.db, 'read')
  writer = await addKey(database.db, 'elements:write')
})
afterAll(async () => {
  await server?.stop()
  await database?.close()
  await made?.drop()
})

interface Answer { status: number, type: string | null, body: Record<string, never> }
async function post(path: string, headers: Headers, body: BodyInit): Promise<Answer> {
  const response = await fetch(`${server.url}${path}`, { method: 'POST', headers, body })
  return { status: response.status, type: response.headers.get('content-type'), body: await response.json() as Answer['body'] }
}
const ask = (path: string, body: object) => post(path, { ...reader, 'content-type': 'application/json' }, JSON.stringify(body))

describe('the bench over HTTP', () => {
  it('answers Doppler as an independent program gives it, in a worker thread', async () => {
    // Source: Skyfield with python-sgp4, special relativity (data/README.md); 0.2 Hz at 2245 MHz.
    const pass = referenceDoppler().passes[0]!
    const startMs = Date.parse(pass.windowStart) + pass.startS * 1000
    const needed = Object.entries(pass.transmitMinusCarrierHz).find(([key]) => Number(key) === 2245e6)![1]
    const { status, body } = await ask('/api/bench/predict', {
      elements: { text: `${pass.line1}\r\n${pass.line2}\r\n` }, station: { latitudeDeg: pass.station.latitudeDeg, longitudeDeg: pass.station.longitudeDeg, heightM: pass.station.heightM, minElevationDeg: -5 },
      from: new Date(startMs).toISOString(), to: new Date(startMs + (needed.length - 1) * pass.stepS * 1000).toISOString(), sampleIntervalS: pass.stepS,
      link: { direction: 'uplink', carrierHz: 2245e6 },
    })
    expect(status).toBe(200)
    const [first] = (body as unknown as { passes: { samples: { at: string, dopplerHz: number }[], table: { verdict: string } }[] }).passes
    const own = new Map(first!.samples.map(sample => [Date.parse(sample.at), sample.dopplerHz]))
    needed.forEach((hz, k) => expect(Math.abs(own.get(startMs + k * pass.stepS * 1000)! - hz)).toBeLessThan(0.2))
  })

  it('answers allowance and loss', async () => {
    // Source: −20 log10 sinc: 0.5 dB at ε 0.185991, 3.922 dB at a half.
    expect(await ask('/api/bench/allowance', { symbolRateHz: 9600, permittedLossDb: 0.5 })).toMatchObject({ status: 200, body: { limitedBy: 'loss', epsilon: expect.closeTo(0.185991, 5) } })
    expect(await ask('/api/bench/loss', { symbolRateHz: 9600, offsetHz: 4800 })).toMatchObject({ status: 200, body: { epsilon: 0.5, lossDb: expect.closeTo(3.922, 3) } })
  })

  it('refuses what it does not know or cannot read, with the field and the line', async () => {
    const station = { latitudeDeg: 0, longitudeDeg: 0, heightM: 0 }
    const window = { from: '2026-11-30T00:00:00Z', to: '2026-12-01T00:00:00Z' }
    const good = { elements: { text: twoLines() }, station, ...window }
    expect(await ask('/api/bench/predict', { ...good, extra: 1 })).toMatchObject({ status: 422, type: 'application/problem+json' })
    expect(await ask('/api/bench/predict', { ...good, link: { detector: 'magic' } })).toMatchObject({ status: 422 })
    expect(await ask('/api/bench/predict', { ...good, from: '2026-11-30T00:00:00' })).toMatchObject({ status: 422, body: { errors: [{ path: 'from' }] } })
    expect(await ask('/api/bench/predict', { ...good, elements: { text: 'A\nB\nC' } })).toMatchObject({ status: 422, body: { errors: [{ path: 'elements.text', line: 1 }] } })
  })
})

describe('uploads over HTTP', () => {
  const path = '/api/element-sets/uploads'
  const form = (content: string, name = 'file') => {
    const data = new FormData()
    data.set(name, new File([content], '../evening.tle'))
    return data
  }

  it('take a form, a text and a JSON body, and tell a set that is held', async () => {
    const first = await post(path, writer, form(`INVENTED\n${twoLines()}`))
    expect(first).toMatchObject({ status: 201, body: { state: 'finished', fileName: 'evening.tle', accepted: 1, alreadyHeld: 0 } })
    expect(await post(path, { ...writer, 'content-type': 'text/plain' }, twoLines())).toMatchObject({ status: 201, body: { accepted: 0, alreadyHeld: 1 } })
    const omm = { OBJECT_NAME: 'OTHER', OBJECT_ID: '2026-802A', EPOCH: '2026-11-30T06:00:00', MEAN_MOTION: 15.5, ECCENTRICITY: 0.001, INCLINATION: 51.6, RA_OF_ASC_NODE: 10, ARG_OF_PERICENTER: 20, MEAN_ANOMALY: 30, EPHEMERIS_TYPE: 0, CLASSIFICATION_TYPE: 'U', NORAD_CAT_ID: 90002, ELEMENT_SET_NO: 1, REV_AT_EPOCH: 1, BSTAR: 0.0001, MEAN_MOTION_DOT: 0, MEAN_MOTION_DDOT: 0 }
    expect(await post(path, { ...writer, 'content-type': 'application/json' }, JSON.stringify([omm]))).toMatchObject({ status: 201, body: { format: 'omm-json', accepted: 1 } })
  })

  it('give the first answer again for the same Idempotency-Key and bytes, and a conflict for others', async () => {
    const headers = { ...writer, 'content-type': 'text/plain', 'idempotency-key': 'evening-1' }
    const first = await post(path, headers, twoLines({ anomaly: '111.1111' }))
    expect(first).toMatchObject({ status: 201, body: { accepted: 1 } })
    expect(await post(path, headers, twoLines({ anomaly: '111.1111' }))).toEqual(first)
    expect(await post(path, headers, twoLines({ anomaly: '222.2222' }))).toMatchObject({ status: 409 })
  })

  it('make again under its Idempotency-Key what a server that died has left unanswered', async () => {
    const headers = { ...writer, 'content-type': 'text/plain', 'idempotency-key': 'morning-1' }
    expect(await post(path, headers, twoLines({ anomaly: '123.1234' }))).toMatchObject({ status: 201, body: { accepted: 1 } })
    const leave = (createdAt: Date) => database.db.update(idempotencyKeys).set({ status: null, answer: null, createdAt }).where(eq(idempotencyKeys.key, 'morning-1'))
    await leave(new Date())
    expect(await post(path, headers, twoLines({ anomaly: '123.1234' }))).toMatchObject({ status: 409 })
    await leave(new Date(Date.now() - 240_000))
    expect(await post(path, headers, twoLines({ anomaly: '123.1234' }))).toMatchObject({ status: 201, body: { alreadyHeld: 1 } })
  })

  it('answer at once above 1 MB and read on behind', async () => {
    const many = Array.from({ length: 8000 }, (_, i) => twoLines({ number: String(20_000 + i) })).join('')
    const pending = await post(path, { ...writer, 'content-type': 'text/plain' }, many)
    expect(pending).toMatchObject({ status: 202, body: { state: 'reading', totalBytes: many.length } })
    await expect.poll(async () => (await (await fetch(`${server.url}${path}/${String(pending.body.id)}`, { headers: writer })).json() as { state: string, accepted: number }), { timeout: 30_000, interval: 200 })
      .toMatchObject({ state: 'finished', accepted: 8000, readBytes: many.length })
  })

  it('refuse a file whole with its lines, a wrong type, a form without the file, and what is too large', async () => {
    expect(await post(path, writer, form('<html><body>Sign in</body></html>'))).toMatchObject({ status: 422, type: 'application/problem+json', body: { detail: expect.stringContaining('HTML'), errors: [{ path: 'file', line: 1 }] } })
    expect(await post(path, { ...writer, 'content-type': 'text/csv' }, 'OBJECT_NAME,EPOCH,MEAN_MOTION\n')).toMatchObject({ status: 422, body: { errors: [{ path: 'body' }] } })
    expect(await post(path, { ...writer, 'content-type': 'application/pdf' }, twoLines())).toMatchObject({ status: 415 })
    expect(await post(path, writer, form(twoLines(), 'other'))).toMatchObject({ status: 422, body: { errors: [{ path: 'file' }] } })
    expect(await post(path, { ...writer, 'content-type': 'multipart/form-data; boundary=x' }, 'no form at all')).toMatchObject({ status: 400 })
    // Streamed, so that no length is declared beforehand.
    const chunk = new Uint8Array(1024 * 1024).fill(0x20)
    let left = 52
    const stream = new ReadableStream({ pull: (controller) => {
      if (left-- > 0) controller.enqueue(chunk)
      else controller.close()
    } })
    const response = await fetch(`${server.url}${path}`, { method: 'POST', headers: { ...writer, 'content-type': 'text/plain' }, body: stream, duplex: 'half' } as RequestInit)
    expect(response.status).toBe(413)
  })
})
