import { and, asc, eq, isNull } from 'drizzle-orm'
import type { z } from 'zod'
import type { PublicationRuleOut, publicationRulesQuery, setPublicationRuleBody } from '#shared/schemas/stations'
import { links, publicationRules, spacecraft, stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { requireFound, requireReferred } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'

const select = (db: Deps['db']) => db.select({
  id: publicationRules.id, stationId: stations.id, stationName: stations.name, linkId: links.id, linkName: links.name, spacecraftName: spacecraft.name,
  publishAt: publicationRules.publishAt, leadMinutes: publicationRules.leadMinutes,
}).from(publicationRules).innerJoin(stations, eq(stations.id, publicationRules.stationId)).innerJoin(links, eq(links.id, publicationRules.linkId)).innerJoin(spacecraft, eq(spacecraft.id, links.spacecraftId)).$dynamic()

/** Links with times of their own, by spacecraft, link and station. */
export async function listPublicationRules({ db }: Pick<Deps, 'db'>, { stationId, linkId }: z.output<typeof publicationRulesQuery>): Promise<{ items: PublicationRuleOut[] }> {
  const items = await select(db)
    .where(and(isNull(links.retiredAt), isNull(stations.retiredAt), stationId ? eq(stations.id, stationId) : undefined, linkId ? eq(links.id, linkId) : undefined))
    .orderBy(asc(spacecraft.name), asc(links.name), asc(stations.name), asc(publicationRules.id))
  return { items }
}

/** Gives a link its own times at a station. A new time of day counts from now on: it owes nothing of the evenings before. */
export async function setPublicationRule({ db, actor, now }: Deps, input: z.output<typeof setPublicationRuleBody>): Promise<PublicationRuleOut> {
  return db.transaction(async (tx) => {
    const { stationId, linkId, publishAt, leadMinutes } = input
    const station = requireReferred((await tx.select().from(stations).where(eq(stations.id, stationId)).for('update'))[0], 'stationId', 'station')
    requireReferred((await tx.select().from(links).where(eq(links.id, linkId)))[0], 'linkId', 'link')
    if (leadMinutes !== null && leadMinutes <= station.freezeMinutes) {
      const message = `In the last ${station.freezeMinutes} minutes before AOS the schedule publishes nothing at ${station.name}: give a longer lead.`
      throw new DomainError('not-valid', `leadMinutes: ${message}`, [{ path: 'leadMinutes', message }])
    }
    const [present] = await tx.select().from(publicationRules).where(and(eq(publicationRules.stationId, stationId), eq(publicationRules.linkId, linkId)))
    const since = present && present.publishAt === publishAt ? {} : { createdAt: now }
    const [row] = present
      ? await tx.update(publicationRules).set({ publishAt, leadMinutes, ...since }).where(eq(publicationRules.id, present.id)).returning()
      : await tx.insert(publicationRules).values({ stationId, linkId, publishAt, leadMinutes, createdAt: now }).returning()
    await recordAudit({ db: tx, actor, now }, {
      action: 'publication-rule.set', entityKind: 'publication-rule', entityId: row!.id,
      before: present ? { publishAt: present.publishAt, leadMinutes: present.leadMinutes } : null, after: { stationId, linkId, publishAt, leadMinutes },
    })
    return requireFound((await select(tx).where(eq(publicationRules.id, row!.id)))[0], 'publication rule')
  })
}

export async function removePublicationRule({ db, actor, now }: Deps, id: string): Promise<void> {
  await db.transaction(async (tx) => {
    const [row] = await tx.delete(publicationRules).where(eq(publicationRules.id, id)).returning()
    const { createdAt: _, ...before } = requireFound(row, 'publication rule')
    await recordAudit({ db: tx, actor, now }, { action: 'publication-rule.remove', entityKind: 'publication-rule', entityId: id, before })
  })
}
