import type { SQL } from 'drizzle-orm'
import { and, eq, inArray, isNotNull, isNull, or, sql } from 'drizzle-orm'
import type { z } from 'zod'
import type { handlingSchema, whichUnassigned } from '#shared/schemas/elements'
import type { Db } from '~~/server/database/client'
import { elementSets, elementUploadHeld } from '~~/server/database/schema'
import { droppedReason } from './store-batch'

type Handling = z.output<typeof handlingSchema>

/** Sets of no spacecraft, by what has been done about them. */
export function isHandled(handling: Handling): SQL | undefined {
  const ofNone = isNull(elementSets.spacecraftId)
  const handled: Record<Handling, SQL | undefined> = {
    open: and(eq(elementSets.state, 'waiting'), isNull(elementSets.keptAt)),
    kept: and(eq(elementSets.state, 'waiting'), isNotNull(elementSets.keptAt)),
    dropped: and(eq(elementSets.state, 'refused'), eq(elementSets.reason, droppedReason)),
  }
  return and(ofNone, handled[handling])
}

/** Sets that an upload brought, and those that it brought again. */
export function isOfUpload(db: Pick<Db, 'select'>, uploadId: string): SQL {
  const again = db.select({ id: elementUploadHeld.elementSetId }).from(elementUploadHeld).where(eq(elementUploadHeld.uploadId, uploadId))
  const brought = db.select({ id: elementSets.id }).from(elementSets).where(eq(elementSets.uploadId, uploadId))
  return inArray(elementSets.id, sql`(${brought} UNION ALL ${again})`)
}

/** Name or designator that hold the text, or a catalogue number that begins with it. */
export function isFound(text: string): SQL | undefined {
  const literal = text.trim().replace(/[\\%_]/g, '\\$&')
  const number = /^\d+$/.test(literal) ? sql`ltrim(${elementSets.catalogueNumber}, '0') LIKE ${`${literal.replace(/^0+(?=\d)/, '')}%`}` : undefined
  return or(number, sql`${elementSets.name} ILIKE ${`%${literal}%`}`, sql`${elementSets.designator} ILIKE ${`%${literal}%`}`)
}

/** Those that a request means: named one by one, or all of an upload or a search. */
export function isMeant(db: Pick<Db, 'select'>, { ids, uploadId, q }: z.output<typeof whichUnassigned>): SQL | undefined {
  return and(ids ? inArray(elementSets.id, ids) : undefined, uploadId ? isOfUpload(db, uploadId) : undefined, q ? isFound(q) : undefined)
}

/** How many wait for somebody, and how many stand where of those that belong to no spacecraft. */
export async function countSets({ db }: { db: Db }): Promise<{ waiting: number, open: number, kept: number, dropped: number }> {
  return {
    waiting: await db.$count(elementSets, and(eq(elementSets.state, 'waiting'), isNotNull(elementSets.spacecraftId))),
    open: await db.$count(elementSets, isHandled('open')),
    kept: await db.$count(elementSets, isHandled('kept')),
    dropped: await db.$count(elementSets, isHandled('dropped')),
  }
}
