import { eq } from 'drizzle-orm'
import type { QuietSpanOut } from '#shared/schemas/quiet-spans'
import { quietSpans } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { requireFound } from '../catalogue/require-row'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import { getQuietSpan } from './list-quiet-spans'
import { refreshForSpan } from './refresh-for-span'

/** Takes a span back that has not ended; it stays on record. */
export async function cancelQuietSpan({ db, actor, now }: Deps<PersonActor>, { id, reason }: { id: string, reason?: string }): Promise<QuietSpanOut> {
  return db.transaction(async (tx) => {
    const deps = { db: tx, actor, now }
    const [row] = await tx.select().from(quietSpans).where(eq(quietSpans.id, id)).for('update')
    const span = requireFound(row, 'quiet span')
    if (span.cancelledAt) throw new DomainError('conflict', `${span.cancelledBy} has cancelled this span already.`)
    if (span.endsAt <= now) throw new DomainError('conflict', 'This span is over: there is nothing left to cancel.')
    await tx.update(quietSpans).set({ cancelledAt: now, cancelledBy: actor.name }).where(eq(quietSpans.id, id))
    await recordAudit(deps, { action: 'quiet-span.cancel', entityKind: 'quiet-span', entityId: id, reason: reason ?? null, after: { cancelledBy: actor.name } })
    await refreshForSpan(deps, span, `quiet span cancelled (${span.reason})`)
    return getQuietSpan(deps, id)
  })
}
