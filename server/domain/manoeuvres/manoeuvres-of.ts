import { and, asc, eq, isNull } from 'drizzle-orm'
import type { ManoeuvreSpread } from '#shared/physics/accuracy/manoeuvre-spread'
import type { MeanElements, Span } from '#shared/physics/types'
import { manoeuvres } from '~~/server/database/schema'
import type { Deps } from '../context'

export type ManoeuvreRow = typeof manoeuvres.$inferSelect

/** Manoeuvres of a spacecraft that count: past and to come, but cancelled ones. */
export function manoeuvresOf({ db }: Pick<Deps, 'db'>, spacecraftId: string): Promise<ManoeuvreRow[]> {
  return db.select().from(manoeuvres).where(and(eq(manoeuvres.spacecraftId, spacecraftId), isNull(manoeuvres.cancelledAt))).orderBy(asc(manoeuvres.startsAt), asc(manoeuvres.id))
}

export const windowsOf = (rows: readonly ManoeuvreRow[]): Span[] => rows.map(row => ({ fromMs: row.startsAt.getTime(), toMs: row.endsAt.getTime() }))

/** Those that a set knows nothing of: its epoch is not after their end. */
export function unknownTo(elements: MeanElements, rows: readonly ManoeuvreRow[]): ManoeuvreSpread[] {
  return rows.filter(row => elements.epochUtcUs / 1000 <= row.endsAt.getTime()).map(row => ({ startMs: row.startsAt.getTime(), speedSigmaMps: row.speedSigmaMps }))
}
