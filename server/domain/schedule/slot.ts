import { and, eq, sql } from 'drizzle-orm'
import { slots } from '~~/server/database/schema'
import type { Deps } from '../context'

export type SlotKind = typeof slots.$inferSelect['kind']
export interface Slot { kind: SlotKind, entity: string, instant: Date }

const keyOf = (slot: Slot) => and(eq(slots.kind, slot.kind), eq(slots.entity, slot.entity), eq(slots.instant, slot.instant))

/**
 * Takes a slot for this transaction: true for exactly one of all servers that ask, now or later. What the slot is for
 * is done in the same transaction, so that a server that dies in the middle leaves it as if never begun.
 */
export async function claimSlot({ db, now }: Pick<Deps, 'db' | 'now'>, slot: Slot): Promise<boolean> {
  // Another server that is at it holds this lock: nobody waits for it.
  const { rows } = await db.execute<{ free: boolean }>(sql`SELECT pg_try_advisory_xact_lock(hashtextextended(${`slot:${slot.kind}:${slot.entity}:${slot.instant.toISOString()}`}, 0)) AS free`)
  if (!rows[0]!.free) return false
  const claimed = await db.insert(slots).values({ ...slot, doneAt: now, outcome: 'Under way.' }).onConflictDoNothing().returning({ kind: slots.kind })
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
