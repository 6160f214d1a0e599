import type { SQL } from 'drizzle-orm'
import { and, eq, gt, inArray, lte, sql } from 'drizzle-orm'
import { slots } from '~~/server/database/schema'
import type { Deps } from '../context'

export type SlotKind = typeof slots.$inferSelect['kind']
export interface Slot { kind: SlotKind, entity: string, instant: Date }

/** A slot that was done longer than this after the present was done by a clock that has been set back since. */
const clockToleranceMs = 10 * 60_000
const latestDone = (now: Date) => new Date(now.getTime() + clockToleranceMs)

/** No slot of a table before its pass counts as done. `t` is the table. */
export const leadNotDone = (now: Date): SQL => sql`NOT EXISTS (SELECT 1 FROM slots s WHERE s.kind = 'publish-lead' AND s.entity = t.id::text AND s.done_at <= ${latestDone(now).toISOString()}::timestamptz)`

/** Done by the clock as it stands; what a clock that ran ahead did is done again when its time has come. */
export const countsAsDone = (now: Date): SQL => lte(slots.doneAt, latestDone(now))

const keyOf = (slot: Slot) => and(eq(slots.kind, slot.kind), eq(slots.entity, slot.entity), eq(slots.instant, slot.instant))

/**
 * Takes a slot for this transaction: true for exactly one of all servers that ask, now or later. What the slot is for
 * is done in the same transaction, so that a server that dies in the middle leaves it as if never begun.
 * A publication that a clock running ahead has done is taken again: what is out already does not go out twice.
 */
export async function claimSlot({ db, now }: Pick<Deps, 'db' | 'now'>, slot: Slot): Promise<boolean> {
  // Another server that is at it holds this lock: nobody waits for it.
  const { rows } = await db.execute<{ free: boolean }>(sql`SELECT pg_try_advisory_xact_lock(hashtextextended(${`slot:${slot.kind}:${slot.entity}:${slot.instant.toISOString()}`}, 0)) AS free`)
  if (!rows[0]!.free) return false
  const claimed = await db.insert(slots).values({ ...slot, doneAt: now, outcome: 'Under way.' })
    .onConflictDoUpdate({ target: [slots.kind, slots.entity, slots.instant], set: { doneAt: now, outcome: 'Under way.' }, setWhere: and(inArray(slots.kind, ['publish-night', 'publish-lead']), gt(slots.doneAt, latestDone(now))) })
    .returning({ kind: slots.kind })
  return claimed.length === 1
}

/** Says what the slot did, for whoever reads it later. */
export async function finishSlot({ db }: Pick<Deps, 'db'>, slot: Slot, outcome: string): Promise<void> {
  await db.update(slots).set({ outcome }).where(keyOf(slot))
}

/** Gives a slot back, so that the next wake takes it again. */
export async function releaseSlot({ db }: Pick<Deps, 'db'>, slot: Slot): Promise<void> {
  await db.delete(slots).where(keyOf(slot))
}

/** How late a slot ran, in words. */
export function lateness(instant: Date, now: Date): string {
  const minutes = Math.floor((now.getTime() - instant.getTime()) / 60_000)
  if (minutes < 1) return 'on time'
  return minutes < 60 ? `${minutes} min late` : `${Math.floor(minutes / 60)} h ${minutes % 60} min late`
}
