import { sql } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import type { Cause } from './cause'
import { at } from './coming-tables'

interface Row extends Record<string, unknown> { id: string, name: string, epoch: string, limit_hours: number, age_hours: number }

/** Spacecraft whose set in use is older than they allow. */
export async function findElementsOld({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT * FROM (
      SELECT sc.id, sc.name, e.epoch, sc.element_age_limit_hours AS limit_hours, extract(epoch FROM ${at(now)} - e.epoch)::double precision / 3600 AS age_hours
      FROM spacecraft sc JOIN element_sets e ON e.id = sc.in_use_set_id WHERE sc.retired_at IS NULL) aged
    WHERE age_hours > limit_hours`)
  return rows.map(row => ({
    kind: 'elements-old',
    cause: `elements-old:${row.id}`,
    severity: 'notice',
    title: `${row.name}: the element set in use is old`,
    detail: `Its epoch is ${formatUtc(new Date(row.epoch).getTime(), 'minute')}; the limit for this spacecraft is ${row.limit_hours} hours. Residuals grow with its age.`,
    action: 'Upload a newer element set, compare it with the one in use, and put it into use.',
    spacecraftId: row.id,
    count: 1,
    weight: row.age_hours / row.limit_hours,
    raises: true,
  } satisfies Cause))
}
