import { and, eq, isNull } from 'drizzle-orm'
import type { z } from 'zod'
import type { takeUpLinkBody } from '#shared/schemas/people'
import type { Db } from '~~/server/database/client'
import { oneTimeLinks, people } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { systemActor } from '../context'
import { DomainError } from '../errors'
import { endSessionsOf } from './end-sessions'
import { findOneTimeLink } from './one-time-links'
import { hashPassword, requireGoodPassword } from './passwords'
import type { SignedIn } from './sign-in'
import { startSession } from './sign-in'
import { hashToken } from './tokens'

type Input = z.output<typeof takeUpLinkBody>
type Person = typeof people.$inferSelect

/** Sets the password that a one-time address stands for, makes the first administrator where it is that, and signs in. */
export async function takeUpLink({ db, now }: { db: Db, now: Date }, input: Input): Promise<SignedIn> {
  const { link, person } = await findOneTimeLink({ db, now }, input.token)
  const who = person ?? requireNameAndEmail(input)
  requireGoodPassword(input.password, [who.name, who.email, who.email.split('@')[0]!])
  const passwordHash = await hashPassword(input.password)
  return db.transaction(async (tx) => {
    // Of two that use the address at once, one finds it used.
    const used = await tx.update(oneTimeLinks).set({ usedAt: now }).where(and(eq(oneTimeLinks.tokenHash, hashToken(input.token)), isNull(oneTimeLinks.usedAt))).returning({ kind: oneTimeLinks.kind })
    if (used.length === 0) await findOneTimeLink({ db: tx, now }, input.token)
    const deps: Deps = { db: tx, now, actor: systemActor }
    const signedUp = link.kind === 'invitation' ? await setPassword(deps, person!.id, passwordHash) : await createFirstAdministrator(deps, who, passwordHash)
    await recordAudit(deps, { action: 'person.take-up', entityKind: 'person', entityId: signedUp.id, after: { kind: link.kind, name: signedUp.name, roles: signedUp.roles } })
    return startSession({ db: tx, now }, signedUp)
  })
}

async function setPassword({ db, now }: Deps, personId: string, passwordHash: string): Promise<Person> {
  const [row] = await db.update(people).set({ passwordHash }).where(and(eq(people.id, personId), isNull(people.disabledAt))).returning()
  if (!row) throw new DomainError('not-found', 'This address has ended: ask an administrator for a new one.')
  await endSessionsOf({ db, now }, personId)
  return row
}

async function createFirstAdministrator({ db, now }: Deps, { name, email }: { name: string, email: string }, passwordHash: string): Promise<Person> {
  if (await db.$count(people) > 0) throw new DomainError('conflict', 'Somebody has been the first already: sign in, or ask an administrator for an invitation.')
  const [row] = await db.insert(people).values({ name, email, passwordHash, roles: ['administrator'], createdAt: now }).returning()
  return row!
}

function requireNameAndEmail({ name, email }: Input): { name: string, email: string } {
  const missing = [...name === undefined ? [{ path: 'name', message: 'Give your name.' }] : [], ...email === undefined ? [{ path: 'email', message: 'Give your e-mail address.' }] : []]
  if (missing.length > 0) throw new DomainError('not-valid', 'The first administrator gives a name and an e-mail address.', missing)
  return { name: name!, email: email! }
}
