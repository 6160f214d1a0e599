import type { z } from 'zod'
import type { invitePersonBody } from '#shared/schemas/people'
import { people } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError, brokenConstraint } from '../errors'
import type { PersonListed } from './read-people'
import { getPerson } from './read-people'
import { sendInvitation } from './send-invitation'

/** A person without a password, and a mail with the one-time address that sets it. */
export async function invitePerson(deps: Deps, input: z.output<typeof invitePersonBody>): Promise<PersonListed> {
  const id = await refuseKnownAddress(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const values = { ...input, roles: [...new Set(input.roles)] }
    const [row] = await tx.insert(people).values({ ...values, createdAt: deps.now }).returning()
    await recordAudit(inner, { action: 'person.create', entityKind: 'person', entityId: row!.id, after: values })
    await sendInvitation(inner, row!)
    return row!.id
  }))
  return getPerson(deps, id)
}

async function refuseKnownAddress<T>(act: () => Promise<T>): Promise<T> {
  try {
    return await act()
  }
  catch (error) {
    if (brokenConstraint(error)?.name !== 'people_email_unique') throw error
    const message = 'Somebody with this e-mail address is listed already.'
    throw new DomainError('conflict', message, [{ path: 'email', message }])
  }
}
