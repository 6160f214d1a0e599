import { asc, eq } from 'drizzle-orm'
import { expect } from 'vitest'
import { audit, slots, tableRevisions } from '../../../server/database/schema'
import type { Db } from '../../../server/database/client'
import { wake } from '../../../server/domain/schedule/wake'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addPass, addTable, presentDigest } from '../../support/fixtures'

export const minute = 60_000
export const hour = 60 * minute
export const day = 24 * hour

/** The schedule by a clock that the test holds. */
export async function wakeAt(db: Db, now: Date, withAlerts = false): Promise<void> {
  const failures: unknown[] = []
  await wake({ db, now }, { withAlerts, onError: (part, error) => failures.push([part, error]) })
  expect(failures).toEqual([])
}

/** An approved table that can be published, of a pass ten minutes long. */
export async function approvedTable(db: Db, { now, craft, station, aos, ...given }: { now: Date, craft: SpacecraftFixture, station: StationFixture, aos: Date } & Parameters<typeof addTable>[4]) {
  return addTable(db, craft, station, await addPass(db, craft, station, aos), { state: 'approved', inputsDigest: await presentDigest(db, now, craft, station), ...given })
}
export const stateOf = async (db: Db, table: { id: string }) => (await db.select({ state: tableRevisions.state }).from(tableRevisions).where(eq(tableRevisions.tableId, table.id)).orderBy(asc(tableRevisions.number))).at(-1)!.state
export const slotsOf = (db: Db, kind: typeof slots.$inferSelect['kind']) => db.select().from(slots).where(eq(slots.kind, kind)).orderBy(asc(slots.instant), asc(slots.entity))
/** Publications by table, as the trail has them. */
export const publications = async (db: Db) => (await db.select({ tableId: audit.tableId }).from(audit).where(eq(audit.action, 'table.publish'))).map(({ tableId }) => tableId)
