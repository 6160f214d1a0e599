import { setTimeout as wait } from 'node:timers/promises'
import { eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { UploadBrief, UploadOut } from '../../shared/schemas/elements'
import { elementSets, elementUploadParts, elementUploads } from '../../server/database/schema'
import { manySets } from '../support/many-sets'
import { runSeed, seededRandom } from '../support/random'
import type { TestServer } from '../support/server'
import { startServer } from '../support/server'
import { fuzzUploads } from '../support/upload-fuzz'
import { killUploads } from '../support/upload-kills'
import { runUpload } from '../support/upload-load'
import type { UploadServer } from '../support/upload-server'
import { startUploadServer } from '../support/upload-server'

it('20,000 sets are accepted within 2 s and stored within a minute, with bounded memory, and keep nobody waiting', async () => {
  const run = await runUpload({ count: 20_000 })
  expect(run).toMatchObject({ status: 202, state: 'finished', accepted: 20_000 })
  expect(run.acceptedMs).toBeLessThanOrEqual(2000)
  expect(run.doneMs).toBeLessThanOrEqual(60_000)
  expect(run.growthMb).toBeLessThanOrEqual(300)
  expect(run.otherP99Ms).toBeLessThanOrEqual(500)
  expect(run.others).toBeGreaterThan(10)
})

it('300 malformed uploads get no 500, each an answer within a second that names lines', async () => {
  const run = await fuzzUploads(300, runSeed())
  expect(run.faults).toEqual([])
  expect(run.statuses[422]).toBeGreaterThan(30)
})

it('a server killed during uploads leaves all of each or none, and what it had answered is kept', { timeout: 300_000 }, async () => {
  for (const { partial, keptOfAnswered, heldInTheEnd, count, ...killed } of await killUploads(3, seededRandom(runSeed()))) {
    expect({ partial, kept: keptOfAnswered ?? count, heldInTheEnd }, JSON.stringify(killed)).toEqual({ partial: 0, kept: count, heldInTheEnd: count })
  }
})

describe('uploads to a server', () => {
  let main: UploadServer
  let second: TestServer
  beforeAll(async () => {
    main = await startUploadServer()
    second = await startServer({ databaseUrl: main.made.url })
  })
  afterAll(async () => {
    await second?.stop()
    await main?.close()
  })
  const follow = async (id: string) => {
    const response = await fetch(`${second.url}/api/element-sets/uploads/${id}/events`, { headers: main.key })
    expect(response.headers.get('content-type')).toContain('text/event-stream')
    return [...(await response.text()).matchAll(/^event: upload\ndata: (.*)$/gm)].map(match => JSON.parse(match[1]!) as UploadBrief)
  }
  const begin = async (body: Buffer) => {
    const response = await main.post(body)
    expect(response.status).toBe(202)
    return (await response.json() as UploadOut).id
  }

  it('are followed by events on another server, to their end', async () => {
    const events = await follow(await begin(manySets({ count: 20_000 })))
    expect(events.length).toBeGreaterThan(2)
    expect(events[0]).toMatchObject({ state: 'reading', accepted: 0 })
    const told = events.map(event => event.readBytes)
    expect(told).toEqual([...told].sort((a, b) => a - b))
    expect(events.at(-1)).toMatchObject({ state: 'finished', accepted: 20_000, readBytes: events[0]!.totalBytes })
    expect((await follow(events[0]!.id)).map(event => event.state)).toEqual(['finished'])
  })

  it('are cancelled from another server while they are stored, and leave nothing', async () => {
    const id = await begin(manySets({ count: 60_000, from: 100_000 }))
    while ((await main.get(`/api/element-sets/uploads/${id}`)).readBytes === 0) await wait(50)
    const cancel = () => fetch(`${second.url}/api/element-sets/uploads/${id}/cancel`, { method: 'POST', headers: main.key })
    expect((await cancel()).status).toBe(200)
    expect((await follow(id)).at(-1)).toMatchObject({ state: 'cancelled', accepted: 0 })
    expect(await main.database.db.$count(elementSets, eq(elementSets.uploadId, id))).toBe(0)
    expect((await cancel()).status).toBe(409)
  })

  it('of the same sets, twice at once, are stored once', async () => {
    const body = manySets({ count: 9000, from: 200_000 })
    const ids = await Promise.all([begin(body), begin(body)])
    for (const id of ids) await follow(id)
    const reports = await Promise.all(ids.map(id => main.get(`/api/element-sets/uploads/${id}`)))
    expect(reports.map(({ accepted, alreadyHeld }) => [accepted, alreadyHeld]).sort()).toEqual([[0, 9000], [9000, 0]])
    expect(reports.map(report => report.sets.length)).toEqual([1000, 1000])
  })

  it('with the same Idempotency-Key give the first answer again and leave no second upload', async () => {
    const body = manySets({ count: 9000, from: 300_000 })
    const before = await main.database.db.$count(elementUploads)
    const first = await (await main.post(body, { 'idempotency-key': 'night-1' })).json() as UploadOut
    await follow(first.id)
    const again = await main.post(body, { 'idempotency-key': 'night-1' })
    expect([again.status, (await again.json() as UploadOut).id]).toEqual([202, first.id])
    expect(await main.database.db.$count(elementUploads)).toBe(before + 1)
  })

  const large = Buffer.alloc(53 * 1024 * 1024, 'x')
  const form = (bytes: Buffer) => {
    const data = new FormData()
    data.append('file', new Blob([new Uint8Array(bytes)]), 'large.tle')
    return data
  }
  it.each<[string, () => Promise<Response>]>([
    ['as a body of stated length', () => main.post(large)],
    ['as a body in chunks', () => fetch(`${main.server.url}/api/element-sets/uploads`, { method: 'POST', headers: { ...main.key, 'content-type': 'text/plain' }, body: new Blob([new Uint8Array(large)]).stream(), duplex: 'half' } as RequestInit)],
    ['as a form', () => fetch(`${main.server.url}/api/element-sets/uploads`, { method: 'POST', headers: main.key, body: form(large) })],
  ])('of more than 50 MB are refused while they come in: %s', async (_, send) => {
    const response = await send()
    expect([response.status, response.headers.get('content-type')]).toEqual([413, 'application/problem+json'])
    expect(await main.database.db.$count(elementUploads, eq(elementUploads.state, 'receiving'))).toBe(0)
  })

  it('by a form keep the file, its name, and not what stands around it', async () => {
    const data = new FormData()
    data.append('note', 'before')
    data.append('file', new Blob([new Uint8Array(manySets({ count: 9000, from: 400_000 }))]), '../night "one".tle')
    data.append('after', 'x'.repeat(1000))
    const response = await fetch(`${main.server.url}/api/element-sets/uploads`, { method: 'POST', headers: main.key, body: data })
    const { id } = await response.json() as UploadOut
    expect((await follow(id)).at(-1)).toMatchObject({ state: 'finished', accepted: 9000, fileName: 'night "one".tle', totalBytes: manySets({ count: 9000, from: 400_000 }).length })
  })

  it('that are broken off while they are sent are on record as failed, without their parts', async () => {
    const gone = new AbortController()
    const body = new ReadableStream({
      async pull(controller) {
        controller.enqueue(new Uint8Array(manySets({ count: 9000, from: 500_000 })))
        await wait(300)
        if (await main.database.db.$count(elementUploads, eq(elementUploads.state, 'receiving')) > 0) gone.abort()
      },
    })
    await expect(fetch(`${main.server.url}/api/element-sets/uploads`, { method: 'POST', headers: { ...main.key, 'content-type': 'text/plain' }, body, duplex: 'half', signal: gone.signal } as RequestInit)).rejects.toThrow()
    const [row] = await main.database.db.select().from(elementUploads).orderBy(sql`created_at DESC`).limit(1)
    while (await main.database.db.$count(elementUploads, eq(elementUploads.state, 'receiving')) > 0) await wait(50)
    const [ended] = await main.database.db.select().from(elementUploads).where(eq(elementUploads.id, row!.id))
    expect(ended).toMatchObject({ state: 'failed', detail: expect.stringContaining('broken off') })
    expect(await main.database.db.$count(elementUploadParts, eq(elementUploadParts.uploadId, row!.id))).toBe(0)
  })
})
