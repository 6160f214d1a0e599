import { sql } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import { ruleDeclines, useDeclined } from '../elements/trail-words'
import type { Cause, CauseScope } from './cause'
import { at } from './coming-tables'

interface Row extends Record<string, unknown> { craft_id: string, name: string, epoch: string, reason: string, use_at: string | null, by: string | null, count: number }

/** A scheduled use that could not be, until somebody decides on a set of that spacecraft, a day at most. */
async function scheduled({ db, now }: Pick<Deps, 'db' | 'now'>, { spacecraftId }: CauseScope): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT sc.id AS craft_id, sc.name, e.epoch, a.reason, a.before ->> 'useAt' AS use_at, a.before ->> 'useScheduledBy' AS by, 1 AS count
    FROM audit a JOIN element_sets e ON e.id = a.entity_id::uuid JOIN spacecraft sc ON sc.id = e.spacecraft_id
    WHERE a.at > ${at(new Date(now.getTime() - 86_400_000))} AND a.entity_kind = 'element-set' AND a.action = ${useDeclined} AND sc.retired_at IS NULL
      ${spacecraftId ? sql`AND sc.id = ${spacecraftId}` : sql``}
      AND NOT EXISTS (SELECT 1 FROM element_sets d WHERE d.spacecraft_id = sc.id AND (d.decided_at > a.at OR (d.id = e.id AND d.use_at IS NOT NULL)))`)
  return rows.map(row => ({
    kind: 'auto-use-declined',
    cause: `scheduled-use-declined:${row.craft_id}`,
    severity: 'notice',
    title: `${row.name}: a scheduled set was not put into use`,
    detail: `${row.by} had scheduled the set of ${formatUtc(new Date(row.epoch).getTime(), 'minute')} for ${formatUtc(Date.parse(row.use_at!), 'minute')}. ${row.reason}`,
    action: 'Compare what waits with what is in use, and decide.',
    spacecraftId: row.craft_id,
    count: 1,
    weight: 1,
    raises: true,
  } satisfies Cause))
}

/** Newer sets that the rule of their spacecraft has left to people and that still wait. */
async function byRule({ db }: Pick<Deps, 'db'>, { spacecraftId }: CauseScope): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT DISTINCT ON (sc.id) sc.id AS craft_id, sc.name, e.epoch, a.reason, NULL AS use_at, NULL AS by, (count(*) OVER (PARTITION BY sc.id))::int AS count
    FROM spacecraft sc JOIN element_sets e ON e.spacecraft_id = sc.id AND e.state = 'waiting' AND e.use_at IS NULL
      LEFT JOIN element_sets used ON used.id = sc.in_use_set_id
      JOIN LATERAL (SELECT reason FROM audit WHERE entity_kind = 'element-set' AND entity_id = e.id::text AND action = ${ruleDeclines} AND after -> 'rule' = sc.auto_use ORDER BY id DESC LIMIT 1) a ON true
    WHERE sc.auto_use IS NOT NULL AND sc.retired_at IS NULL AND (used.id IS NULL OR e.epoch_utc_us > used.epoch_utc_us)
      ${spacecraftId ? sql`AND sc.id = ${spacecraftId}` : sql``}
    ORDER BY sc.id, e.epoch_utc_us DESC`)
  return rows.map(row => ({
    kind: 'auto-use-declined',
    cause: `auto-use-declined:${row.craft_id}`,
    severity: 'notice',
    title: `${row.name}: the rule leaves a new set to you`,
    detail: `The set of ${formatUtc(new Date(row.epoch).getTime(), 'minute')} waits. ${row.reason}`,
    action: 'Compare it with the set in use, and use or refuse it.',
    spacecraftId: row.craft_id,
    count: row.count,
    weight: row.count,
    raises: true,
  } satisfies Cause))
}

export async function findAutoUseDeclined(deps: Pick<Deps, 'db' | 'now'>, scope: CauseScope): Promise<Cause[]> {
  return [...await scheduled(deps, scope), ...await byRule(deps, scope)]
}
