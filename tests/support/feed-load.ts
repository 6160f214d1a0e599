import { createHash } from 'node:crypto'
import { Agent, request } from 'node:http'
import { setTimeout as wait } from 'node:timers/promises'
import type { Database } from '../../server/database/client'
import { databaseNow, openDatabase } from '../../server/database/client'
import { apiKeys } from '../../server/database/schema'
import { scheduleActor } from '../../server/domain/context'
import { publishRevision } from '../../server/domain/tables/publish-revision'
import { verifyTable } from '../examples/verify-table.mjs'
import { createTestDatabase } from './database'
import type { SpacecraftFixture, StationFixture } from './fixtures'
import { addPass, addRevision, addSpacecraft, addStation, addTable, presentDigest } from './fixtures'
import { startServer } from './server'

export interface FeedLoad {
  polls: number
  /** Answers by status; 0 where there was none. */
  statuses: Record<string, number>
  notModifiedShare: number
  p50Ms: number
  p99Ms: number
  longestMs: number
  /** Tables published anew meanwhile, and served tables whose digest or signature did not hold. */
  publications: number
  broken: number
}

interface Controller {
  station: StationFixture
  key: string
  tables: { id: string, number: number, tag: string | null }[]
  listTag: string | null
  /** One poll after the other. */
  last: Promise<void>
}

const stationCount = 20
const tablesEach = 20
const retuneCount = 60

/**
 * Station controllers poll the built server at a steady rate, whether it keeps up or not: half of the polls ask for the
 * station's list, half for one of its tables, each with the tag of what the controller has. A poll's time counts from when it
 * was due. Meanwhile tables are published anew, one a second; each that is fetched is verified.
 */
export async function runFeedLoad({ pollsPerS, seconds }: { pollsPerS: number, seconds: number }): Promise<FeedLoad> {
  const made = await createTestDatabase()
  const database = openDatabase(made.url, { max: 4 })
  const server = await startServer({ databaseUrl: made.url })
  const agent = new Agent({ keepAlive: true, maxSockets: 200 })
  try {
    const craft = await addSpacecraft(database.db, new Date())
    const controllers = await Promise.all(Array.from({ length: stationCount }, (_, n) => addController(database, craft, n)))
    const poll = pollerOf(server.url, agent)
    await warmUp(controllers, poll)
    const run: FeedLoad = { polls: 0, statuses: {}, notModifiedShare: 0, p50Ms: 0, p99Ms: 0, longestMs: 0, publications: 0, broken: 0 }
    const times: number[] = []
    const keys = JSON.parse((await poll('/keys', controllers[0]!.key, null)).text) as { keys: object[] }
    const until = performance.now() + seconds * 1000
    const publishing = publishAnew(database, craft, controllers, () => performance.now() < until, () => { run.publications += 1 })
    const began = performance.now()
    while (performance.now() < until) {
      for (const due = (performance.now() - began) / 1000 * pollsPerS; run.polls < due; run.polls++) {
        const [controller, n, dueAt] = [controllers[run.polls % controllers.length]!, Math.floor(run.polls / controllers.length), performance.now()]
        controller.last = controller.last.then(() => pollOnce(controller, n, { dueAt, poll, keys, run, times }))
      }
      await wait(2)
    }
    await Promise.all([...controllers.map(({ last }) => last), publishing])
    times.sort((a, b) => a - b)
    const at = (share: number) => Math.round(times[Math.min(times.length - 1, Math.floor(share * times.length))]! * 10) / 10
    return { ...run, notModifiedShare: Math.round((run.statuses['304'] ?? 0) / run.polls * 1e4) / 1e4, p50Ms: at(0.5), p99Ms: at(0.99), longestMs: at(1) }
  }
  finally {
    agent.destroy()
    await server.stop()
    await database.close()
    await made.drop()
  }
}

async function addController({ db }: Database, craft: SpacecraftFixture, n: number): Promise<Controller> {
  const station = await addStation(db)
  const key = `nb_${String(n).padStart(8, '0')}${'k'.repeat(32)}`
  await db.insert(apiKeys).values({ name: 'Controller', prefix: key.slice(0, 11), keyHash: createHash('sha256').update(key).digest('hex'), scope: 'station', stationId: station.id })
  const now = await databaseNow(db)
  const tables: Controller['tables'] = []
  for (let i = 1; i <= tablesEach; i++) {
    const pass = await addPass(db, craft, station, new Date(now.getTime() + i * 3600_000))
    const { id } = await addTable(db, craft, station, pass, { state: 'approved', retunes: retunesFrom(pass.aos, 0), inputsDigest: await presentDigest(db, now, craft, station) })
    await publishRevision({ db, now, actor: scheduleActor }, { tableId: id, mover: 'schedule' })
    tables.push({ id, number: 1, tag: null })
  }
  return { station, key, tables, listTag: null, last: Promise.resolve() }
}

const retunesFrom = (aos: Date, shiftHz: number) => Array.from({ length: retuneCount }, (_, i) => ({
  at: new Date(aos.getTime() + i * 10_000).toISOString(), frequencyHz: 437_510_000 - 300 * i + shiftHz, slopeHzPerS: 0, dopplerHz: 10_000 - 300 * i, rangeRateMps: -6850 + 200 * i,
  azimuthDeg: 10 + i, elevationDeg: 5 + i / 2, residualMinHz: -150, residualMaxHz: 150, lossDb: 0.1,
}))

/** A table of one station after the other, each a second. */
async function publishAnew({ db }: Database, craft: SpacecraftFixture, controllers: Controller[], goesOn: () => boolean, done: () => void): Promise<void> {
  for (let n = 0; goesOn(); n++) {
    const { station, tables } = controllers[n % controllers.length]!
    const table = tables[n % tables.length]!
    table.number += 1
    const now = await databaseNow(db)
    await addRevision(db, craft, station, { tableId: table.id, aos: now, number: table.number, state: 'approved', retunes: retunesFrom(now, n), inputsDigest: await presentDigest(db, now, craft, station) })
    const outcome = await publishRevision({ db, now, actor: scheduleActor }, { tableId: table.id, mover: 'schedule' })
    if (outcome.outcome !== 'published') throw new Error(`Not published: ${outcome.detail}`)
    done()
    await wait(1000)
  }
}

interface Answer { status: number, tag: string | null, text: string, digest: string | null }
type Poll = (path: string, key: string, tag: string | null) => Promise<Answer>

/** Plain requests on kept connections, so that the time is the server's and not a client library's. */
function pollerOf(url: string, agent: Agent): Poll {
  return (path, key, tag) => new Promise((resolve) => {
    const asking = request(`${url}/api/station/v1${path}`, { agent, timeout: 10_000, headers: { authorization: `Bearer ${key}`, accept: 'application/json', ...(tag ? { 'if-none-match': tag } : {}) } }, (response) => {
      const chunks: Buffer[] = []
      response.on('data', (chunk: Buffer) => chunks.push(chunk)).on('end', () => resolve({ status: response.statusCode!, tag: response.headers.etag ?? null, text: Buffer.concat(chunks).toString(), digest: (response.headers['table-digest'] as string | undefined) ?? null }))
    })
    const none = () => resolve({ status: 0, tag: null, text: '', digest: null })
    asking.on('error', none).on('timeout', () => asking.destroy()).end()
  })
}

/** Each controller has all that there is, and what it has fetched is marked before the count begins. */
async function warmUp(controllers: Controller[], poll: Poll): Promise<void> {
  for (const controller of controllers) {
    for (const table of controller.tables) table.tag = (await poll(`/tables/${table.id}`, controller.key, null)).tag
  }
  await wait(1000)
  for (const controller of controllers) controller.listTag = (await poll('/tables', controller.key, null)).tag
}

interface PollRun { dueAt: number, poll: Poll, keys: { keys: object[] }, run: FeedLoad, times: number[] }

/** The list, then a table, the list again, the next table, and so on. */
async function pollOnce(controller: Controller, n: number, { dueAt, poll, keys, run, times }: PollRun): Promise<void> {
  const table = n % 2 === 0 ? null : controller.tables[Math.floor(n / 2) % controller.tables.length]!
  const { status, tag, text, digest } = await poll(table ? `/tables/${table.id}` : '/tables', controller.key, table ? table.tag : controller.listTag)
  times.push(performance.now() - dueAt)
  run.statuses[status] = (run.statuses[status] ?? 0) + 1
  if (status !== 200) return
  if (!table) controller.listTag = tag
  else {
    table.tag = tag
    if (!holds(text, keys, tag, digest)) run.broken += 1
  }
}

/** Body, tag and headers are of one revision, and it is signed. */
function holds(text: string, keys: { keys: object[] }, tag: string | null, digest: string | null): boolean {
  try {
    verifyTable(text, keys)
    const own = (JSON.parse(text) as { digest: string }).digest
    return tag === `"${own}-json"` && digest === `sha-256=${own}`
  }
  catch {
    return false
  }
}
