import { sql } from 'drizzle-orm'
import type { Db } from '~~/server/database/client'
import { people } from '~~/server/database/schema'
import { pageAddress } from '~~/server/mail/addresses'
import { makeOneTimeLink } from './one-time-links'

/** In an installation without people: the address at which the first administrator signs up. A new one at every call; the one before stops working. Null once there is somebody. */
export async function ensureFirstAdministrator({ db, now }: { db: Db, now: Date }): Promise<string | null> {
  return db.transaction(async (tx) => {
    // Servers that start together take turns.
    await tx.execute(sql`SELECT pg_advisory_xact_lock(hashtext('first-administrator'))`)
    if (await tx.$count(people) > 0) return null
    const { path } = await makeOneTimeLink({ db: tx, now }, { kind: 'first-administrator' })
    return pageAddress(path)
  })
}
