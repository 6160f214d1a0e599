import { Agent, request } from 'node:http'
import { sql } from 'drizzle-orm'
import { expect } from 'vitest'
import { openDatabase } from '../../server/database/client'
import { spacecraft } from '../../server/database/schema'
import { requestRefresh } from '../../server/domain/prediction/request-refresh'
import { hashPassword } from '../../server/domain/auth/passwords'
import { password, signIn } from '../api/actors'
import { createTestDatabase } from './database'
import { addPerson, addSpacecraft, addStation } from './fixtures'
import { referencePasses } from './reference-data'
import { startServer } from './server'

export interface StopFigures { exitCode: number | null, secondsToEnd: number, answered: number, writesKept: number, refused: number }

/** Ten days of one of the reference's orbits, near the most that is answered at once. */
function longBench() {
  const { line1, line2, windowStart } = referencePasses().satellites.find(({ id }) => id === 'SSO500')!
  const from = Date.parse(windowStart)
  return { elements: { text: `${line1}\n${line2}` }, station: { latitudeDeg: 60, longitudeDeg: 10, heightM: 50 }, from: new Date(from).toISOString(), to: new Date(from + 10 * 86_400_000).toISOString(), sampleIntervalS: 10 }
}

/**
 * SIGTERM while people write and ask, what-ifs are computed and predictions run. A request that the server had taken
 * is answered; one that it had not taken left no trace.
 */
export async function stopUnderLoad(): Promise<StopFigures> {
  const made = await createTestDatabase()
  const { db, close } = openDatabase(made.url, { max: 3 })
  try {
    const { email } = await addPerson(db, ['administrator'], { passwordHash: await hashPassword(password) })
    for (let index = 0; index < 4; index++) await addStation(db)
    for (let index = 0; index < 6; index++) await addSpacecraft(db, new Date())
    const before = await db.$count(spacecraft)
    const server = await startServer({ databaseUrl: made.url })
    const session = await signIn(server.url, email)
    const agent = new Agent({ keepAlive: true })
    let isStopping = false
    let benched = 0
    const bench = longBench()
    const seen = { answered: 0, refused: 0, statuses: new Map<number, number>() }
    const acknowledged: string[] = []

    const call = (path: string, body?: object) => new Promise<number | null>((resolve) => {
      const text = body === undefined ? undefined : JSON.stringify(body)
      const outgoing = request(`${server.url}${path}`, { agent, method: body ? 'POST' : 'GET', headers: { ...session, ...(text === undefined ? {} : { 'content-type': 'application/json', 'content-length': Buffer.byteLength(text) }) } }, (response) => {
        // Whoever gets the beginning of an answer gets its end.
        response.resume().once('end', () => resolve(response.statusCode ?? 0)).once('error', () => resolve(-1))
      })
      outgoing.once('error', () => resolve(null))
      outgoing.end(text)
    })
    const keepCalling = async (ask: (index: number) => Promise<number | null>) => {
      for (let index = 0; ; index++) {
        const status = await ask(index)
        if (status === null) {
          seen.refused++
          if (isStopping) return
        }
        else {
          seen.answered++
          seen.statuses.set(status, (seen.statuses.get(status) ?? 0) + 1)
        }
      }
    }
    const writer = (name: string) => keepCalling(async (index) => {
      const given = `${name} ${index}`
      const status = await call('/api/spacecraft', { name: given })
      if (status === 201) acknowledged.push(given)
      return status
    })
    const load = [...['A', 'B', 'C'].map(writer), keepCalling(() => call('/api/passes')), keepCalling(() => call('/')), ...[1, 2, 3].map(() => keepCalling(async () => {
      const status = await call('/api/bench/predict', bench)
      if (status === 200) benched++
      return status
    }))]
    await requestRefresh({ db }, { reason: 'Load.' })
    const underWay = async () => (await db.execute(sql`SELECT 1 FROM pgboss.job WHERE state = 'active'`)).rows.length
    await expect.poll(() => seen.answered, { timeout: 20_000 }).toBeGreaterThan(20)
    await expect.poll(underWay, { timeout: 20_000, interval: 20, message: 'no job was under way: the test would try nothing' }).toBeGreaterThan(0)

    // What-ifs last long: one is under way at any moment.
    await expect.poll(() => benched, { timeout: 30_000 }).toBeGreaterThan(0)
    const asked = performance.now()
    isStopping = true
    process.kill(server.pid, 'SIGTERM')
    const exitCode = await server.ended
    const secondsToEnd = (performance.now() - asked) / 1000
    await Promise.all(load)
    agent.destroy()
    expect([...seen.statuses.keys()].filter(status => status < 200 || status >= 500), `statuses ${JSON.stringify([...seen.statuses])}; the log:\n${server.log().slice(-3000)}`).toEqual([])
    const kept = (await db.select({ name: spacecraft.name }).from(spacecraft)).map(({ name }) => name).filter(name => /^[ABC] \d+$/.test(name))
    expect(kept.sort()).toEqual(acknowledged.sort())
    expect(kept.length).toBeGreaterThan(0)
    expect(await db.$count(spacecraft)).toBe(before + kept.length)
    expect((await db.execute(sql`SELECT id FROM pgboss.job WHERE state = 'active'`)).rows, 'a job was taken along').toEqual([])
    expect((await db.execute(sql`SELECT 1 FROM servers WHERE stopped_at IS NULL`)).rows).toEqual([])
    return { exitCode, secondsToEnd: Math.round(secondsToEnd * 10) / 10, answered: seen.answered, writesKept: kept.length, refused: seen.refused }
  }
  finally {
    await close()
    await made.drop()
  }
}
