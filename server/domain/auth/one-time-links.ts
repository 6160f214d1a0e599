import { and, eq, gt, isNull } from 'drizzle-orm'
import type { z } from 'zod'
import type { linkInfo } from '#shared/schemas/people'
import type { Db } from '~~/server/database/client'
import { oneTimeLinks, people } from '~~/server/database/schema'
import { DomainError } from '../errors'
import { hashToken, newToken } from './tokens'

const invitationDays = 7
/** A first administrator's address works until it is used. */
const untilUsed = new Date('9999-12-31T00:00:00.000Z')

type Clock = { db: Db, now: Date }

/** An address for one use. The token stands behind #, so that it reaches no server's or proxy's log. Earlier ones for the same end stop working. */
export async function makeOneTimeLink({ db, now }: Clock, link: { kind: 'first-administrator' } | { kind: 'invitation', personId: string }): Promise<{ path: `/${string}`, expiresAt: Date }> {
  const personId = link.kind === 'invitation' ? link.personId : null
  const token = newToken()
  const expiresAt = personId === null ? untilUsed : new Date(now.getTime() + invitationDays * 24 * 3600_000)
  await db.delete(oneTimeLinks).where(and(eq(oneTimeLinks.kind, link.kind), personId === null ? undefined : eq(oneTimeLinks.personId, personId), isNull(oneTimeLinks.usedAt)))
  await db.insert(oneTimeLinks).values({ tokenHash: hashToken(token), kind: link.kind, personId, createdAt: now, expiresAt })
  return { path: `/welcome#token=${token}`, expiresAt }
}

/** The link behind a token, with its person; one answer for what never was, has been used or has ended. */
export async function findOneTimeLink({ db, now }: Clock, token: string) {
  const [found] = await db.select({ link: oneTimeLinks, person: people }).from(oneTimeLinks).leftJoin(people, eq(people.id, oneTimeLinks.personId))
    .where(and(eq(oneTimeLinks.tokenHash, hashToken(token)), isNull(oneTimeLinks.usedAt), gt(oneTimeLinks.expiresAt, now), isNull(people.disabledAt)))
  if (!found) throw new DomainError('not-found', 'This address has been used, has ended or never was: ask an administrator for a new one.')
  return found
}

/** What an address is for, shown before it is used. */
export async function lookAtOneTimeLink(clock: Clock, token: string): Promise<z.infer<typeof linkInfo>> {
  const { link, person } = await findOneTimeLink(clock, token)
  return { kind: link.kind, name: person?.name ?? null, email: person?.email ?? null }
}
