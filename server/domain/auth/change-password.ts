import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { changePasswordBody } from '#shared/schemas/people'
import { people } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import { endSessionsOf } from './end-sessions'
import { hashPassword, requireGoodPassword, verifyNothing, verifyPassword } from './passwords'

/** Changes one's own password and ends every other session of one's own. */
export async function changePassword(deps: Deps<PersonActor>, input: z.output<typeof changePasswordBody>): Promise<void> {
  const { db, actor, now } = deps
  const [person] = await db.select({ passwordHash: people.passwordHash }).from(people).where(eq(people.id, actor.id))
  const right = person?.passwordHash ? await verifyPassword(person.passwordHash, input.currentPassword) : await verifyNothing(input.currentPassword)
  if (!right) throw new DomainError('not-valid', 'currentPassword: This is not your present password.', [{ path: 'currentPassword', message: 'This is not your present password.' }])
  try {
    requireGoodPassword(input.newPassword, [actor.name, actor.email, actor.email.split('@')[0]!])
  }
  catch (error) {
    if (error instanceof DomainError) throw new DomainError(error.code, error.message, error.fields.map(field => ({ ...field, path: 'newPassword' })))
    throw error
  }
  const passwordHash = await hashPassword(input.newPassword)
  await db.transaction(async (tx) => {
    await tx.update(people).set({ passwordHash }).where(eq(people.id, actor.id))
    await endSessionsOf({ db: tx, now }, actor.id, actor.sessionHash)
    await recordAudit({ ...deps, db: tx }, { action: 'person.change-password', entityKind: 'person', entityId: actor.id })
  })
}
