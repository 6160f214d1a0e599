import { randomUUID } from 'node:crypto'
import type { Deps } from '~~/server/domain/context'
import { mails } from '~~/server/database/schema'
import { enqueue } from '~~/server/jobs/queue'
import type { MailAddress } from './addresses'
import { sender } from './addresses'
import type { Letter } from './letter'

export interface MailInput extends Letter {
  kind: 'alert' | 'digest' | 'invitation'
  to: MailAddress
  alertId?: string
}

/**
 * Writes the mail down and asks for its delivery, in the caller's transaction: it goes out exactly when what it tells
 * has happened. Its Message-ID is fixed here, so that a repeated try is known as the same message.
 */
export async function queueMail({ db, now }: Pick<Deps, 'db' | 'now'>, mail: MailInput): Promise<string> {
  const id = randomUUID()
  await db.insert(mails).values({
    id,
    kind: mail.kind,
    toName: mail.to.name,
    toAddress: mail.to.address,
    subject: mail.subject,
    text: mail.text,
    html: mail.html,
    messageId: `<${id}@${sender().address.split('@').at(-1)}>`,
    alertId: mail.alertId ?? null,
    createdAt: now,
  })
  await enqueue(db, 'mail', { mailId: id })
  return id
}
