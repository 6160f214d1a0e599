import { and, eq, gt, isNull, sql } from 'drizzle-orm'
import type { Role } from '#shared/permissions'
import type { Db } from '~~/server/database/client'
import { people, sessions } from '~~/server/database/schema'
import type { PersonActor } from '../context'
import { sessionIdleMs } from './tokens'

/** The person behind a session that is neither ended, idle too long, past its end, nor of somebody disabled. */
export async function findSession({ db, now }: { db: Db, now: Date }, idHash: string): Promise<PersonActor | null> {
  const [row] = await db.select({ person: people, lastSeenAt: sessions.lastSeenAt }).from(sessions)
    .innerJoin(people, eq(people.id, sessions.personId))
    .where(and(
      eq(sessions.idHash, idHash),
      isNull(sessions.endedAt),
      gt(sessions.expiresAt, now),
      gt(sessions.lastSeenAt, new Date(now.getTime() - sessionIdleMs)),
      isNull(people.disabledAt),
    ))
  if (!row) return null
  // Once a minute is enough to know that somebody is there.
  if (now.getTime() - row.lastSeenAt.getTime() > 60_000) {
    await db.update(sessions).set({ lastSeenAt: sql`greatest(${sessions.lastSeenAt}, ${now})` }).where(eq(sessions.idHash, idHash))
  }
  const { id, name, email, roles, zone } = row.person
  return { kind: 'person', id, name, email, roles: roles as Role[], zone, sessionHash: idHash }
}
