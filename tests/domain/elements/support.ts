import { readFileSync } from 'node:fs'
import { randomUUID } from 'node:crypto'
import { eq } from 'drizzle-orm'
import type { Database } from '~~/server/database/client'
import { openDatabase } from '~~/server/database/client'
import { audit, elementSets, links, spacecraft, stations } from '~~/server/database/schema'
import type { Actor, Deps } from '~~/server/domain/context'
import { originalOf } from '~~/server/domain/elements/upload-parts'
import { uploadElements } from '~~/server/domain/elements/upload-elements'
import { createTestDatabase } from '../../support/database'

/** The evening of the day on which the example sets have their epochs. */
export const NOW = new Date('2026-11-30T18:00:00.000Z')

export const flight: Actor = { kind: 'key', id: randomUUID(), name: 'Flight desk', scope: 'elements:write', stationId: null }

export const reference = (path: string): Buffer => readFileSync(new URL(`../../../data/reference/${path}`, import.meta.url))

export interface World { database: Database, deps: Deps, close: () => Promise<void> }

export async function openWorld(now = NOW): Promise<World> {
  const { url, drop } = await createTestDatabase()
  const database = openDatabase(url)
  return {
    database,
    deps: { db: database.db, now, actor: flight },
    close: async () => {
      await database.close()
      await drop()
    },
  }
}

export const upload = (deps: Deps, content: string | Buffer, fileName = 'sets.tle') =>
  uploadElements(deps, { bytes: Buffer.from(content as string), source: 'file', fileName })

/** What was sent, as it is kept. */
export async function originalBytes({ db }: Deps, uploadId: string): Promise<Buffer> {
  const parts: Buffer[] = []
  for await (const part of originalOf(db, uploadId)) parts.push(part)
  return Buffer.concat(parts)
}

export async function addSpacecraft({ db }: Deps, values: Partial<typeof spacecraft.$inferInsert> = {}): Promise<string> {
  const [row] = await db.insert(spacecraft).values({ name: 'Invented One', catalogueNumber: '90001', designator: '2026-801A', ...values }).returning({ id: spacecraft.id })
  return row!.id
}

export async function addStation({ db }: Deps, values: Partial<typeof stations.$inferInsert> = {}): Promise<string> {
  const [row] = await db.insert(stations).values({ name: 'Invented Hill', latitudeDeg: 69, longitudeDeg: 18, heightM: 100, zone: 'UTC', ...values }).returning({ id: stations.id })
  return row!.id
}

export async function addLink({ db }: Deps, spacecraftId: string, values: Partial<typeof links.$inferInsert> = {}): Promise<string> {
  const [row] = await db.insert(links).values({
    spacecraftId, name: 'Telemetry', direction: 'downlink', carrierHz: 437.5e6, bandLowHz: 437e6, bandHighHz: 438e6, symbolRateHz: 9600,
    modulation: 'BPSK', detector: 'quadrature', approveWhatHolds: true, ...values,
  }).returning({ id: links.id })
  return row!.id
}

export const stateOf = async ({ db }: Deps, id: string) => (await db.select({ state: elementSets.state }).from(elementSets).where(eq(elementSets.id, id)))[0]?.state
export const trailOf = ({ db }: Deps, entityId: string) => db.select().from(audit).where(eq(audit.entityId, entityId)).orderBy(audit.id)

/** Two lines of a set with the checksums that the published rule gives; the numbers are invented. */
export function twoLines(change: { number?: string, designator?: string, epoch?: string, inclination?: string, node?: string, anomaly?: string, meanMotion?: string, bstar?: string } = {}): string {
  const { number = '90001', designator = '26801A', epoch = '26334.51234567', inclination = ' 97.4021', node = ' 45.1234', anomaly = '272.5678', meanMotion = '15.21987654', bstar = ' 31234-3' } = change
  const line1 = `1 ${number}U ${designator}   ${epoch}  .00008123  00000+0 ${bstar} 0  101`
  const line2 = `2 ${number} ${inclination} ${node} 0012345  87.6543 ${anomaly} ${meanMotion} 4321`
  return `${withChecksum(line1)}\n${withChecksum(line2)}\n`
}

/** Digits count themselves, minus signs one, modulo 10. */
function withChecksum(line: string): string {
  if (line.length !== 68) throw new Error(`A line of ${line.length} columns: "${line}"`)
  return line + [...line].reduce((sum, c) => sum + (c === '-' ? 1 : /\d/.test(c) ? Number(c) : 0), 0) % 10
}
