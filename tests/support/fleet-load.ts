import { readFileSync } from 'node:fs'
import { setTimeout as wait } from 'node:timers/promises'
import { eq, sql } from 'drizzle-orm'
import type { Db } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import * as schema from '../../server/database/schema'
import { hashPassword } from '../../server/domain/auth/passwords'
import { requestRefresh } from '../../server/domain/prediction/request-refresh'
import { password, signIn } from '../api/actors'
import { fleetOf, FROM_MS, stationsOf } from '../bench/fleet'
import { createTestDatabase } from './database'
import { addElementSet, addPerson, addStation } from './fixtures'
import { startServer } from './server'

const DEG = 180 / Math.PI

/** Spacecraft with a set of today each and one downlink, in few statements. */
async function addFleet(db: Db, count: number): Promise<void> {
  const shiftUs = (Date.now() - FROM_MS) * 1000
  const { uploadId } = await addElementSet(db, new Date())
  const fleet = fleetOf(count).map(elements => ({ ...elements, epochUtcUs: elements.epochUtcUs + shiftUs }))
  for (let start = 0; start < count; start += 500) {
    const some = fleet.slice(start, start + 500)
    const crafts = await db.insert(schema.spacecraft).values(some.map(({ name }) => ({ name: name! }))).returning({ id: schema.spacecraft.id })
    const sets = await db.insert(schema.elementSets).values(some.map((elements, i) => ({
      uploadId, spacecraftId: crafts[i]!.id, state: 'in-use' as const, name: elements.name, epoch: new Date(Math.floor(elements.epochUtcUs / 1000)), epochUtcUs: elements.epochUtcUs,
      elements, originalText: elements.name!, lineNumber: start + i + 1, sha256: elements.name!, contentSha256: elements.name!,
    }))).returning({ id: schema.elementSets.id })
    for (const [i, set] of sets.entries()) await db.update(schema.spacecraft).set({ inUseSetId: set.id }).where(eq(schema.spacecraft.id, crafts[i]!.id))
    await db.insert(schema.links).values(crafts.map(({ id }) => ({
      spacecraftId: id, name: 'Telemetry', direction: 'downlink' as const, carrierHz: 437.5e6, bandLowHz: 435e6, bandHighHz: 438e6, symbolRateHz: 9600, modulation: 'GMSK', detector: 'quadrature' as const, approveWhatHolds: true,
    })))
  }
}

const residentMb = (pid: number) => Number(/^VmRSS:\s+(\d+) kB$/m.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))![1]) / 1024
const quantile = (values: number[], share: number) => values.sort((a, b) => a - b)[Math.min(values.length - 1, Math.floor(share * values.length))] ?? Number.NaN

export interface FleetRun {
  pairs: number
  passes: number
  tables: number
  failedJobs: number
  minutes: number
  /** Of `/api/health/live`, asked ten times a second all the while. */
  liveP99Ms: number
  largestMb: number
  /** From the request that puts a set into use until its passes and tables at all stations are new. */
  useToShownS: number
}

/**
 * A server computes three days of a whole fleet while it is asked whether it lives; then one set is put into use.
 * The reference is common practice: the figures of the requirement, read from outside the server.
 */
export async function runFleet({ spacecraft, stations }: { spacecraft: number, stations: number }): Promise<FleetRun> {
  const database = await createTestDatabase()
  const { db, close } = openDatabase(database.url)
  try {
    await db.insert(schema.settings).values({ key: 'horizonDays', value: 3 })
    for (const site of stationsOf(stations)) await addStation(db, { latitudeDeg: site.latitudeRad * DEG, longitudeDeg: site.longitudeRad * DEG, heightM: site.heightM })
    await addFleet(db, spacecraft)
    const { email } = await addPerson(db, ['flight-dynamics'], { passwordHash: await hashPassword(password) })
    const server = await startServer({ databaseUrl: database.url })
    try {
      const started = performance.now()
      const pairs = await db.transaction(tx => requestRefresh({ db: tx }, { reason: 'the fleet' }))
      const answers: number[] = []
      let largestMb = 0
      for (let idle = 0; idle < 5;) {
        const asked = performance.now()
        await (await fetch(`${server.url}/api/health/live`)).arrayBuffer()
        answers.push(performance.now() - asked)
        largestMb = Math.max(largestMb, residentMb(server.pid))
        await wait(100)
        if (answers.length % 10 === 0) idle = await waitingJobs(db) === 0 ? idle + 5 : 0
      }
      const minutes = (performance.now() - started) / 60_000
      return { pairs, minutes, liveP99Ms: quantile(answers, 0.99), largestMb, ...await countWhatIsThere(db), useToShownS: await putOneIntoUse(server.url, db, email) }
    }
    finally {
      await server.stop()
    }
  }
  finally {
    await close()
    await database.drop()
  }
}

async function waitingJobs(db: Db): Promise<number> {
  const { rows } = await db.execute<{ n: number }>(sql`SELECT count(*)::int AS n FROM pgboss.job WHERE name = 'predict' AND state IN ('created', 'retry', 'active')`)
  return rows[0]!.n
}

async function countWhatIsThere(db: Db) {
  const { rows } = await db.execute<{ passes: number, tables: number, failed: number }>(sql`
    SELECT (SELECT count(*)::int FROM passes WHERE gone_at IS NULL) AS passes, (SELECT count(*)::int FROM table_revisions) AS tables,
      (SELECT count(*)::int FROM pgboss.job WHERE name = 'predict' AND state = 'failed') AS failed`)
  return { passes: rows[0]!.passes, tables: rows[0]!.tables, failedJobs: rows[0]!.failed }
}

/** A set a little ahead of the one in use goes into use by the interface; gives the seconds until every coming pass and table is made with it. */
async function putOneIntoUse(url: string, db: Db, email: string): Promise<number> {
  const session = await signIn(url, email)
  const [one] = await db.select().from(schema.elementSets).where(eq(schema.elementSets.state, 'in-use')).limit(1)
  const ahead = { ...one!.elements, meanAnomalyDeg: (one!.elements.meanAnomalyDeg + 0.05) % 360 }
  const set = await addElementSet(db, one!.epoch, { spacecraftId: one!.spacecraftId, elements: ahead, state: 'waiting' })
  const started = performance.now()
  const response = await fetch(`${url}/api/element-sets/${set.id}/use`, { method: 'POST', headers: session })
  if (response.status !== 200) throw new Error(`Putting the set into use answered ${response.status}: ${await response.text()}`)
  for (;;) {
    const { rows } = await db.execute<{ old: number }>(sql`
      SELECT count(*)::int AS old FROM passes p LEFT JOIN tables t ON t.pass_id = p.id LEFT JOIN table_revisions r ON r.table_id = t.id AND r.state IN ('drafted', 'approved')
      WHERE p.spacecraft_id = ${one!.spacecraftId} AND p.gone_at IS NULL AND p.aos > now() AND (p.element_set_id <> ${set.id} OR r.element_set_id <> ${set.id})`)
    if (rows[0]!.old === 0 && await waitingJobs(db) === 0) break
    if (performance.now() - started > 60_000) throw new Error('A minute after the set went into use its passes or tables are still the old ones.')
    await wait(25)
  }
  const shown = await fetch(`${url}/api/passes?spacecraftId=${one!.spacecraftId}&limit=1000`, { headers: session })
  if (shown.status !== 200) throw new Error(`The passes answered ${shown.status}.`)
  return (performance.now() - started) / 1000
}
