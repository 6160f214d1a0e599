import { and, asc, desc, eq, lte } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { Role } from '#shared/permissions'
import { may } from '#shared/permissions'
import { audit, elementSets, people, spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import { useDeclined } from './trail-words'
import { lockSet, unscheduled, useElementSet } from './use-element-set'

const AT_ONCE = 50

export interface DueUse { id: string, spacecraftId: string, useAt: Date }

/** Sets whose instant has come, the earliest first. */
export async function findDueUses({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<DueUse[]> {
  const rows = await db.select({ id: elementSets.id, spacecraftId: elementSets.spacecraftId, useAt: elementSets.useAt }).from(elementSets)
    .where(lte(elementSets.useAt, now)).orderBy(asc(elementSets.useAt), asc(elementSets.id)).limit(AT_ONCE)
  return rows.map(row => ({ id: row.id, spacecraftId: row.spacecraftId!, useAt: row.useAt! }))
}

/**
 * Puts a set into use as the person who scheduled it. Where that can no longer be, because another set was put into use
 * since, the orbit has decayed, or the person may no longer decide, it says so in the trail, and an alert follows
 * (alerts/auto-use-declined.ts); the set waits on. Of several servers one does it.
 */
export async function runScheduledUse(deps: Deps, due: DueUse): Promise<void> {
  await deps.db.transaction(async (tx) => {
    await tx.select({ id: spacecraft.id }).from(spacecraft).where(eq(spacecraft.id, due.spacecraftId)).for('update')
    const set = await lockSet(tx, due.id)
    // Another server was faster, or a person has taken it back or moved it.
    if (!set.useAt || set.useAt > deps.now) return
    const inner = { ...deps, db: tx }
    try {
      const { person, formerId } = await decisionOf(inner, due.id, set.useScheduledById)
      await useElementSet({ ...inner, actor: person }, { id: due.id, formerId, reason: `As scheduled for ${formatUtc(set.useAt.getTime(), 'second')}.` })
    }
    catch (error) {
      if (!(error instanceof DomainError)) throw error
      await tx.update(elementSets).set(unscheduled).where(eq(elementSets.id, due.id))
      await recordAudit(inner, {
        action: useDeclined, entityKind: 'element-set', entityId: due.id, reason: error.message,
        before: { useAt: set.useAt.toISOString(), useScheduledBy: set.useScheduledBy }, after: { useAt: null, spacecraftId: due.spacecraftId },
      })
    }
  })
}

/** Who decided, as they are now, and what was in use then. */
async function decisionOf({ db }: Pick<Deps, 'db'>, setId: string, personId: string | null): Promise<{ person: PersonActor, formerId: string | null }> {
  const [row] = personId ? await db.select().from(people).where(eq(people.id, personId)) : []
  if (!row || row.disabledAt || !may(row.roles as Role[], 'elements:decide')) throw new DomainError('not-allowed', 'The person who scheduled it may no longer put sets into use.')
  const [decided] = await db.select({ after: audit.after }).from(audit)
    .where(and(eq(audit.entityKind, 'element-set'), eq(audit.entityId, setId), eq(audit.action, 'element-set.schedule-use'))).orderBy(desc(audit.id)).limit(1)
  const { id, name, email, zone } = row
  return { person: { kind: 'person', id, name, email, roles: row.roles as Role[], zone, sessionHash: '' }, formerId: (decided?.after as { inUseSetId?: string | null } | undefined)?.inUseSetId ?? null }
}
