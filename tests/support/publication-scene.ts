import { createHash, createPublicKey, randomUUID, verify } from 'node:crypto'
import { eq, sql } from 'drizzle-orm'
import { expect } from 'vitest'
import type { Db } from '../../server/database/client'
import { antennas, audit, passes, signingKeys, slots, tableRevisions, tables } from '../../server/database/schema'
import { addSpacecraft, addStation, checkOf, presentDigest } from './fixtures'

const minute = 60_000
const hour = 60 * minute
const passMs = 10
export const leadMinutes = 60

/** A station and a spacecraft whose approved tables come due when a test adds them; nothing is predicted beside. */
export async function layOutScene(db: Db, now: Date) {
  // Twelve hours from any evening, so that each table goes out in its own slot.
  const noon = new Date(now.getTime() + 12 * hour).toISOString().slice(11, 16)
  const station = await addStation(db, { zone: 'UTC', publishAt: noon, publishLeadMinutes: leadMinutes, freezeMinutes: 5 })
  // Passes follow each other closely and none wants the antenna of another.
  await db.update(antennas).set({ setupS: 0 }).where(eq(antennas.id, station.antenna.id))
  const craft = await addSpacecraft(db, new Date(now.getTime() - hour))
  const hours = Array.from({ length: 60 }, (_, index) => new Date((Math.floor(now.getTime() / hour) - 2 + index) * hour))
  await db.insert(slots).values(hours.map(instant => ({ kind: 'roll-forward' as const, entity: 'all', instant, doneAt: now, outcome: 'Left out here.' }))).onConflictDoNothing()
  const inputsDigest = await presentDigest(db, now, craft, station)
  let added = 0
  let free = 0

  /** Approved tables of passes so short that none is in another's way, with AOS from `from` on or where there is room, one each `everyMs`. */
  async function addApproved(count: number, from: Date, everyMs = 50): Promise<void> {
    const first = Math.max(from.getTime(), free)
    free = first + count * everyMs
    const rows = Array.from({ length: count }, (_, index) => ({ passId: randomUUID(), tableId: randomUUID(), aos: new Date(first + index * everyMs) }))
    added += count
    await db.transaction(async (tx) => {
      await tx.insert(passes).values(rows.map(({ passId, aos }) => ({ id: passId, spacecraftId: craft.id, stationId: station.id, elementSetId: craft.set.id, aos, culmination: aos, los: new Date(aos.getTime() + passMs), maxElevationDeg: 40 })))
      await tx.insert(tables).values(rows.map(({ passId, tableId }) => ({ id: tableId, passId, linkId: craft.link.id })))
      await tx.insert(tableRevisions).values(rows.map(({ tableId, aos }) => ({
        tableId, number: 1, state: 'approved' as const, verdict: 'holds' as const, radioId: station.radio.id, elementSetId: craft.set.id, approvedBy: 'Test', approvedAt: now, inputsDigest,
        check: { ...checkOf(5, aos), workable: [{ from: aos.toISOString(), to: new Date(aos.getTime() + passMs).toISOString() }] },
        retunes: [{ at: aos.toISOString(), frequencyHz: 437_510_000, slopeHzPerS: 0, dopplerHz: 10_000, rangeRateMps: -6850, azimuthDeg: 200, elevationDeg: 5, residualMinHz: -50, residualMaxHz: 50, lossDb: 0.1 }],
      })))
    })
  }
  return { station, craft, addApproved, added: () => added }
}

export async function waitUntilPublished(db: Db, timeoutMs: number): Promise<void> {
  await expect.poll(() => db.$count(tableRevisions, sql`state = 'approved'`), { timeout: timeoutMs, interval: 250 }).toBe(0)
}

/** Slots and publications are the same number; each table is out once, whole, digested, signed, in the trail and told. */
export async function expectEachPublishedOnce(db: Db, count: number): Promise<void> {
  const done = await db.select().from(slots).where(sql`kind = 'publish-lead'`)
  expect(done.map(slot => slot.outcome).filter(outcome => !/^Published 1 table, /.test(outcome))).toEqual([])
  const revisions = await db.select().from(tableRevisions)
  expect({ slots: done.length, entities: new Set(done.map(slot => slot.entity)).size, revisions: revisions.length, out: revisions.filter(({ state }) => state === 'published').length })
    .toEqual({ slots: count, entities: count, revisions: count, out: count })
  const trail = await db.select().from(audit).where(sql`action = 'table.publish'`)
  expect(trail.map(row => row.entityId).sort()).toEqual(revisions.map(({ id }) => id).sort())
  const keys = new Map((await db.select().from(signingKeys)).map(key => [key.kid, createPublicKey({ key: key.publicJwk, format: 'jwk' })]))
  for (const revision of revisions) {
    expect(createHash('sha256').update(revision.canonical!).digest('hex')).toBe(revision.digest)
    const [header, , signature] = revision.signature!.split('.') as [string, string, string]
    const { kid } = JSON.parse(Buffer.from(header, 'base64url').toString('utf8')) as { kid: string }
    expect(verify(null, Buffer.from(`${header}.${Buffer.from(revision.canonical!).toString('base64url')}`), keys.get(kid)!, Buffer.from(signature, 'base64url'))).toBe(true)
  }
}
