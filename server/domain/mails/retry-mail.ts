import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { mailOut } from '#shared/schemas/alerts'
import { mails } from '~~/server/database/schema'
import { enqueue } from '~~/server/jobs/queue'
import { recordAudit } from '../audit'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { mailToOut } from './list-mails'

/** A mail that failed is queued once more, under its first Message-ID. */
export async function retryMail(deps: Deps, id: string): Promise<z.infer<typeof mailOut>> {
  return deps.db.transaction(async (tx) => {
    const [row] = await tx.select().from(mails).where(eq(mails.id, id)).for('update')
    const mail = requireFound(row, 'mail')
    if (mail.state !== 'failed') throw new DomainError('conflict', mail.state === 'sent' ? 'This mail has been sent.' : 'This mail waits for its next try already.')
    const [queued] = await tx.update(mails).set({ state: 'queued' }).where(eq(mails.id, id)).returning()
    await enqueue(tx, 'mail', { mailId: id })
    await recordAudit({ ...deps, db: tx }, { action: 'mail.retry', entityKind: 'mail', entityId: id, before: { state: 'failed' }, after: { state: 'queued' } })
    return mailToOut(queued!)
  })
}
