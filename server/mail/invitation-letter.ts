import { formatUtc } from '#shared/utils/format'
import type { Letter } from './letter'
import { composeLetter } from './letter'

export interface InvitationLetterData {
  organisation: string
  name: string
  invitedBy: string
  /** Role names as people read them. */
  roles: readonly string[]
  /** The one-time address, whole. */
  address: string
  expiresAt: Date
  /** The person has a password already and is to choose another. */
  renews?: boolean
}

/** Somebody may sign in from now on: the address sets a password, once, until it ends. */
export function invitationLetter(invitation: InvitationLetterData): Letter {
  return composeLetter({
    subject: invitation.renews ? `A new password for ${invitation.organisation}` : `${invitation.invitedBy} invites you to ${invitation.organisation}`,
    heading: `Good day, ${invitation.name}`,
    paragraphs: [
      invitation.renews ? `${invitation.invitedBy} asks you to choose a new password for your account at ${invitation.organisation}.` : `${invitation.invitedBy} has made you an account at ${invitation.organisation}, where tuning tables for satellite passes are made and published.`,
      `Choose a password at the address below. It works once, until ${formatUtc(invitation.expiresAt.getTime(), 'minute')}.`,
    ],
    facts: [['Roles', invitation.roles.join(', ')]],
    button: { label: 'Choose a password', address: invitation.address },
    closing: invitation.renews ? 'Until you do, the present password works. If you did not expect this, tell an administrator.' : 'If you did not expect this, leave it: without the address nobody can sign in as you.',
  })
}
