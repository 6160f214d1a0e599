import { and, eq, isNull, ne } from 'drizzle-orm'
import type { Db } from '~~/server/database/client'
import { sessions } from '~~/server/database/schema'

/** Ends every session of a person, or every one but the session that asks. */
export async function endSessionsOf({ db, now }: { db: Db, now: Date }, personId: string, exceptIdHash?: string): Promise<void> {
  await db.update(sessions).set({ endedAt: now })
    .where(and(eq(sessions.personId, personId), isNull(sessions.endedAt), exceptIdHash === undefined ? undefined : ne(sessions.idHash, exceptIdHash)))
}
