import { eq } from 'drizzle-orm'
import type { Role } from '#shared/permissions'
import { roleNames } from '#shared/permissions'
import { people } from '~~/server/database/schema'
import { pageAddress } from '~~/server/mail/addresses'
import { invitationLetter } from '~~/server/mail/invitation-letter'
import { queueMail } from '~~/server/mail/queue-mail'
import { recordAudit } from '../audit'
import { makeOneTimeLink } from '../auth/one-time-links'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { readSettings } from '../settings/read-settings'

/** A new one-time address by mail; the one before stops working. Inside the caller's transaction. */
export async function sendInvitation(deps: Deps, person: { id: string, name: string, email: string, roles: readonly string[], passwordHash?: string | null }): Promise<void> {
  const { path, expiresAt } = await makeOneTimeLink(deps, { kind: 'invitation', personId: person.id })
  const { organisation } = await readSettings(deps.db)
  const letter = invitationLetter({ organisation, name: person.name, invitedBy: deps.actor.name, roles: person.roles.map(role => roleNames[role as Role]), address: pageAddress(path), expiresAt, renews: !!person.passwordHash })
  await queueMail(deps, { kind: 'invitation', to: { name: person.name, address: person.email }, ...letter })
  await recordAudit(deps, { action: 'person.invite', entityKind: 'person', entityId: person.id, after: { email: person.email, expiresAt: expiresAt.toISOString() } })
}

/** For an invitation that got lost or ended, and for somebody who has forgotten the password: the old one works until the address is used. */
export async function inviteAgain(deps: Deps, personId: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const [row] = await tx.select().from(people).where(eq(people.id, personId)).for('update')
    const person = requireFound(row, 'person')
    if (person.disabledAt) throw new DomainError('conflict', `${person.name} is disabled: enable first, then invite.`)
    await sendInvitation({ ...deps, db: tx }, person)
  })
}
