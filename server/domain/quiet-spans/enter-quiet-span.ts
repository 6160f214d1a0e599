import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { QuietSpanOut, createQuietSpanBody } from '#shared/schemas/quiet-spans'
import { links, quietSpans, spacecraft, stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { requireReferred } from '../catalogue/require-row'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import { getQuietSpan } from './list-quiet-spans'
import { refreshForSpan } from './refresh-for-span'

/** Enters a span in which no retune may take effect; the tables that it concerns are planned anew around it. */
export async function enterQuietSpan({ db, actor, now }: Deps<PersonActor>, input: z.output<typeof createQuietSpanBody>): Promise<QuietSpanOut> {
  const { stationId, spacecraftId, linkId, reason } = input
  const startsAt = new Date(input.startsAt)
  const endsAt = new Date(input.endsAt)
  if (endsAt <= now) throw new DomainError('not-valid', 'endsAt: this span is over already.', [{ path: 'endsAt', message: 'This span is over already: give an end that is still to come.' }])
  return db.transaction(async (tx) => {
    const deps = { db: tx, actor, now }
    if (stationId) requireReferred((await tx.select().from(stations).where(eq(stations.id, stationId)))[0], 'stationId', 'station')
    if (spacecraftId) requireReferred((await tx.select().from(spacecraft).where(eq(spacecraft.id, spacecraftId)))[0], 'spacecraftId', 'spacecraft')
    if (linkId) {
      const link = requireReferred((await tx.select().from(links).where(eq(links.id, linkId)))[0], 'linkId', 'link')
      if (spacecraftId && link.spacecraftId !== spacecraftId) throw new DomainError('not-valid', 'linkId: this link is another spacecraft’s.', [{ path: 'linkId', message: 'This link is another spacecraft’s: choose one of its own.' }])
    }
    const [row] = await tx.insert(quietSpans).values({ stationId, spacecraftId, linkId, startsAt, endsAt, reason, enteredBy: actor.name, createdAt: now }).returning()
    await recordAudit(deps, { action: 'quiet-span.enter', entityKind: 'quiet-span', entityId: row!.id, reason, after: { stationId, spacecraftId, linkId, startsAt: input.startsAt, endsAt: input.endsAt } })
    await refreshForSpan(deps, row!, `quiet span entered (${reason})`)
    return getQuietSpan(deps, row!.id)
  })
}
