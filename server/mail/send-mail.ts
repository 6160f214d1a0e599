import { eq, sql } from 'drizzle-orm'
import type { Transporter } from 'nodemailer'
import { mails } from '~~/server/database/schema'
import type { Deps } from '~~/server/domain/context'
import { sender } from './addresses'

export interface SendOptions {
  transport: Transporter
  /** No further try follows: what fails now has failed. */
  lastTry?: boolean
}

/**
 * Hands one mail to the mail server and writes down what became of it. A mail that was sent is not sent again; one that
 * the server refuses for good (5xx) has failed at once; anything else is kept, and thrown, so that the queue tries again.
 * @throws the mail server's error when another try makes sense
 */
export async function sendMail({ db, now }: Pick<Deps, 'db' | 'now'>, mailId: string, { transport, lastTry = false }: SendOptions): Promise<void> {
  const [mail] = await db.select().from(mails).where(eq(mails.id, mailId))
  if (!mail || mail.state !== 'queued') return
  try {
    await transport.sendMail({
      from: sender(),
      to: { name: mail.toName, address: mail.toAddress },
      subject: mail.subject,
      text: mail.text,
      html: mail.html,
      messageId: mail.messageId,
      date: mail.createdAt,
      headers: { 'Auto-Submitted': 'auto-generated' },
      disableFileAccess: true,
      disableUrlAccess: true,
    })
  }
  catch (error) {
    const failed = lastTry || isRefusedForGood(error)
    await db.update(mails).set({ attempts: sql`${mails.attempts} + 1`, lastError: describe(error), ...(failed ? { state: 'failed' as const } : {}) }).where(eq(mails.id, mailId))
    if (failed) return
    throw error
  }
  await db.update(mails).set({ attempts: sql`${mails.attempts} + 1`, state: 'sent', sentAt: now, lastError: null }).where(eq(mails.id, mailId))
}

/** RFC 5321 §4.2.1: 5yz, do not repeat. A refused sign-in is about the product's settings, not about this mail: it is kept. */
function isRefusedForGood(error: unknown): boolean {
  const { code, responseCode } = error as { code?: string, responseCode?: number }
  return code !== 'EAUTH' && typeof responseCode === 'number' && responseCode >= 500 && responseCode < 600
}

function describe(error: unknown): string {
  // A mail server's words may hold what a database does not.
  return (error instanceof Error ? error.message : String(error)).replaceAll('\u0000', '').toWellFormed().slice(0, 500)
}
