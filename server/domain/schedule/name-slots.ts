import { inArray, sql } from 'drizzle-orm'
import type { slots } from '~~/server/database/schema'
import { links, stations } from '~~/server/database/schema'
import type { Deps } from '../context'

type SlotKey = Pick<typeof slots.$inferSelect, 'kind' | 'entity'>

export const tableName = sql`sc.name || ' at ' || st.name || ', ' || l.name`

const fixed: Record<string, string> = { 'digest': 'Digest of the night', 'roll-forward': 'All predictions' }

/** Whom or what slots are for, in words. */
export async function nameSlots({ db }: Pick<Deps, 'db'>, rows: readonly SlotKey[]): Promise<(slot: SlotKey) => string> {
  const of = (kind: SlotKey['kind']) => [...new Set(rows.filter(row => row.kind === kind).map(({ entity }) => entity))]
  const evenings = of('publish-night').map(entity => entity.split(':') as [string, string?])
  const stationIds = evenings.map(([stationId]) => stationId)
  const linkIds = evenings.flatMap(([, linkId]) => linkId ?? [])
  const tableIds = of('publish-lead')
  const stationNames = stationIds.length > 0 ? await db.select({ id: stations.id, name: stations.name }).from(stations).where(inArray(stations.id, stationIds)) : []
  const linkNames = linkIds.length > 0 ? (await db.execute<{ id: string, name: string }>(sql`SELECT l.id, sc.name || ', ' || l.name AS name FROM ${links} l JOIN spacecraft sc ON sc.id = l.spacecraft_id WHERE l.id::text IN (SELECT jsonb_array_elements_text(${JSON.stringify(linkIds)}::jsonb))`)).rows : []
  const tableNames = tableIds.length > 0
    ? (await db.execute<{ id: string, name: string }>(sql`
        SELECT t.id, ${tableName} AS name FROM tables t JOIN passes p ON p.id = t.pass_id JOIN links l ON l.id = t.link_id
        JOIN spacecraft sc ON sc.id = p.spacecraft_id JOIN stations st ON st.id = p.station_id
        WHERE t.id::text IN (SELECT jsonb_array_elements_text(${JSON.stringify(tableIds)}::jsonb))`)).rows
    : []
  const names = new Map([...stationNames, ...linkNames, ...tableNames].map(({ id, name }) => [id, name]))
  return ({ kind, entity }) => {
    const [id, linkId] = entity.split(':') as [string, string?]
    const [name, ofLink] = [names.get(id), linkId && names.get(linkId)]
    return fixed[kind] ?? (name === undefined || ofLink === undefined && linkId !== undefined ? 'Since removed' : ofLink ? `${ofLink} at ${name}` : name)
  }
}
