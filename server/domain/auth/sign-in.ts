import { and, eq, isNull } from 'drizzle-orm'
import type { Role } from '#shared/permissions'
import type { PersonOut } from '#shared/schemas/people'
import type { Db } from '~~/server/database/client'
import { people, sessions } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { DomainError } from '../errors'
import { verifyNothing, verifyPassword } from './passwords'
import { hashToken, newToken, sessionMaxMs } from './tokens'

export interface SignedIn { user: PersonOut, sid: string }

/** One answer for every cause of failure, and the same work done for each. */
export async function signIn({ db, now }: { db: Db, now: Date }, input: { email: string, password: string }): Promise<SignedIn> {
  const email = input.email.trim().toLowerCase()
  const [person] = await db.select().from(people).where(and(eq(people.email, email), isNull(people.disabledAt)))
  const right = person?.passwordHash ? await verifyPassword(person.passwordHash, input.password) : await verifyNothing(input.password)
  if (!person || !right) throw new DomainError('not-signed-in', 'E-mail address or password are not right.')
  return startSession({ db, now }, person)
}

export async function startSession({ db, now }: { db: Db, now: Date }, person: typeof people.$inferSelect): Promise<SignedIn> {
  const sid = newToken()
  const user: PersonOut = { id: person.id, name: person.name, email: person.email, roles: person.roles as Role[], zone: person.zone }
  await db.transaction(async (tx) => {
    await tx.insert(sessions).values({ idHash: hashToken(sid), personId: person.id, createdAt: now, lastSeenAt: now, expiresAt: new Date(now.getTime() + sessionMaxMs) })
    await recordAudit({ db: tx, now, actor: { kind: 'person', ...user, sessionHash: '' } }, { action: 'person.sign-in', entityKind: 'person', entityId: person.id })
  })
  return { user, sid }
}

export async function endSession({ db, now }: { db: Db, now: Date }, sessionHash: string): Promise<void> {
  await db.update(sessions).set({ endedAt: now }).where(and(eq(sessions.idHash, sessionHash), isNull(sessions.endedAt)))
}
