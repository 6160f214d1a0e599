import type { KeyScope, Role } from '#shared/permissions'
import type { Db } from '~~/server/database/client'

export interface PersonActor { kind: 'person', id: string, name: string, email: string, roles: Role[], zone: string, sessionHash: string }
export interface KeyActor { kind: 'key', id: string, name: string, scope: KeyScope, stationId: string | null }
export interface ServerActor { kind: 'schedule' | 'system', name: string }
export type Actor = PersonActor | KeyActor | ServerActor

/** What every domain function is handed: the database, who acts, and the clock. */
export interface Deps<A extends Actor = Actor> { db: Db, actor: A, now: Date }

export const scheduleActor: ServerActor = { kind: 'schedule', name: 'Schedule' }
export const systemActor: ServerActor = { kind: 'system', name: 'Server' }

export function actorId(actor: Actor): string | null {
  return actor.kind === 'person' || actor.kind === 'key' ? actor.id : null
}
/** For `approved_by_id` and the like, which refer to people only. */
export function personId(actor: Actor): string | null {
  return actor.kind === 'person' ? actor.id : null
}
