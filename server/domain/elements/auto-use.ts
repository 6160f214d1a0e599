import { and, desc, eq, gt, isNotNull, isNull, sql } from 'drizzle-orm'
import type { ComparisonOut } from '#shared/schemas/elements'
import { audit, elementSets, spacecraft } from '~~/server/database/schema'
import { enqueueOnce } from '~~/server/jobs/queue'
import { recordAudit } from '../audit'
import type { Deps, ServerActor } from '../context'
import { DomainError } from '../errors'
import { compareElementSet } from './compare-element-set'
import { whyNotPlausible } from './plausible'
import { ruleDeclines } from './trail-words'
import { useElementSet } from './use-element-set'

const ruleActor: ServerActor = { kind: 'schedule', name: 'Rule: use what is plausible' }
const MOST_JUDGED = 20

/** Waiting sets, newer than the one in use, that the rule of their spacecraft has not judged as it stands now. */
const isUnjudged = and(
  eq(elementSets.state, 'waiting'), isNull(elementSets.useAt),
  sql`NOT EXISTS (SELECT 1 FROM ${audit} AS judged WHERE judged.entity_kind = 'element-set' AND judged.entity_id = ${elementSets.id}::text AND judged.action = ${ruleDeclines} AND judged.after -> 'rule' = ${spacecraft.autoUse})`,
  sql`${elementSets.epochUtcUs} > coalesce((SELECT used.epoch_utc_us FROM ${elementSets} AS used WHERE used.id = ${spacecraft.inUseSetId}), 0)`,
)

/** Asks for a judgement of every spacecraft whose rule has something to judge, however it came: by upload, assignment, or a new rule. */
export async function requestAutoUse({ db }: Pick<Deps, 'db'>): Promise<number> {
  const rows = await db.selectDistinct({ id: spacecraft.id }).from(spacecraft).innerJoin(elementSets, eq(elementSets.spacecraftId, spacecraft.id))
    .where(and(isNotNull(spacecraft.autoUse), isNull(spacecraft.retiredAt), isUnjudged)).orderBy(spacecraft.id)
  if (rows.length > 0) await db.transaction(tx => enqueueOnce(tx, 'auto-use', rows.map(({ id }) => ({ key: id, data: { spacecraftId: id } })), { priority: 0 }))
  return rows.length
}

/**
 * Takes the newest plausible waiting set of a spacecraft into use, by its rule. What it leaves to people says why and
 * waits; each set is judged once under a rule. Gives the set that was put into use.
 */
export async function autoUse({ db, now }: Pick<Deps, 'db' | 'now'>, { spacecraftId }: { spacecraftId: string }): Promise<string | null> {
  const deps: Deps = { db, now, actor: ruleActor }
  const [craft] = await db.select().from(spacecraft).where(and(eq(spacecraft.id, spacecraftId), isNull(spacecraft.retiredAt)))
  const rule = craft?.autoUse
  if (!craft || !rule) return null
  const waiting = await db.select({ id: elementSets.id, warnings: elementSets.warnings }).from(elementSets).innerJoin(spacecraft, eq(spacecraft.id, elementSets.spacecraftId))
    .where(and(eq(elementSets.spacecraftId, spacecraftId), isUnjudged)).orderBy(desc(elementSets.epochUtcUs), desc(elementSets.id)).limit(MOST_JUDGED)
  const [scheduled] = await db.select({ by: elementSets.useScheduledBy }).from(elementSets).where(and(eq(elementSets.spacecraftId, spacecraftId), gt(elementSets.useAt, now))).limit(1)
  for (const { id, warnings } of waiting) {
    const comparison = await compareElementSet(deps, { id })
    const why = scheduled ? [`${scheduled.by} has scheduled another set of ${craft.name}; a person's decision goes first.`] : [...warnings.filter(({ code }) => code === 'fits-another').map(({ message }) => message), ...whyNotPlausible(rule, comparison)]
    if (why.length === 0 && await take(deps, id, comparison)) return id
    if (why.length > 0) await decline(deps, id, { rule, why, comparison })
  }
  return null
}

/** Not where a person has decided meanwhile: what is left is judged anew. */
async function take(deps: Deps, id: string, { inUseSetId, largest, jumpSigmas }: ComparisonOut): Promise<boolean> {
  try {
    await useElementSet(deps, { id, formerId: inUseSetId, reason: `Plausible: passes move by ${largest.shiftS.toFixed(2)} s at most, Doppler by ${(largest.allowanceShare * 100).toFixed(1)} % of an allowance, ${jumpSigmas?.toFixed(1)} σ along the track.` })
    return true
  }
  catch (error) {
    if (error instanceof DomainError) return false
    throw error
  }
}

async function decline(deps: Deps, id: string, { rule, why, comparison }: { rule: object, why: readonly string[], comparison: ComparisonOut }): Promise<void> {
  const { largest, jumpSigmas, inUseSetId } = comparison
  await recordAudit(deps, { action: ruleDeclines, entityKind: 'element-set', entityId: id, reason: why.join(' '), after: { rule, inUseSetId, largest, jumpSigmas } })
}
