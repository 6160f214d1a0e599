import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import type { Access } from '#shared/routes'
import { may } from '#shared/permissions'
import type { Actor } from '~~/server/domain/context'
import { findKey } from '~~/server/domain/auth/find-key'
import { findSession } from '~~/server/domain/auth/find-session'
import { DomainError } from '~~/server/domain/errors'
import type { Db } from '~~/server/database/client'
import { databaseNow } from '~~/server/database/client'
import { requireOwnOrigin } from './origin'
import { readSessionHash } from './session'

const changing = new Set(['POST', 'PUT', 'PATCH', 'DELETE'])

/** Who asks: a key, a signed-in person, or nobody; and what the clock says. The tables are asked at every request. */
export async function authenticate(event: H3Event, db: Db): Promise<{ actor: Actor | null, now: Date }> {
  const header = getRequestHeader(event, 'authorization')
  if (header !== undefined) {
    const bearer = /^Bearer ([\w-]{20,200})$/i.exec(header)?.[1]
    const found = bearer ? await findKey({ db }, bearer) : null
    if (!found) throw new DomainError('not-signed-in', 'This key is not known, or it has been revoked.')
    return found
  }
  if (changing.has(event.method)) requireOwnOrigin(event)
  const sessionHash = await readSessionHash(event)
  const now = await databaseNow(db)
  return { actor: sessionHash ? await findSession({ db, now }, sessionHash) : null, now }
}

/** Holds the actor against what the route states. Nothing is allowed that is not written there. */
export function authorise(access: Access, actor: Actor | null): void {
  if (access.kind === 'public') return
  if (!actor) throw new DomainError('not-signed-in', 'Sign in, or send a key as Authorization: Bearer KEY.')
  if (allowed(access, actor)) return
  throw new DomainError('not-allowed', actor.kind === 'key' ? `A key of scope ${actor.scope} may not do this.` : 'Your roles do not allow this.')
}

function allowed(access: Exclude<Access, { kind: 'public' }>, actor: Actor): boolean {
  if (actor.kind === 'key') {
    if (access.kind === 'station-key') return actor.scope === 'station' && actor.stationId !== null
    if (access.kind === 'metrics-key') return actor.scope === 'metrics'
    return access.kind === 'permission' && access.keys.includes(actor.scope)
  }
  if (actor.kind !== 'person') return false
  if (access.kind === 'person') return true
  return access.kind === 'permission' && may(actor.roles, access.permission)
}
