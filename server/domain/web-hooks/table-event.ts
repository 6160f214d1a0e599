import { pageAddress } from '~~/server/mail/addresses'
import type { LockedTable, RevisionRow } from '../tables/lock-table'

/** What a message about a table holds: which, of what, and where to read it. */
export function tableEvent(table: LockedTable, revision: Pick<RevisionRow, 'number' | 'verdict'>, more: Record<string, unknown> = {}): Record<string, unknown> {
  const { pass, craft, station, link } = table
  return {
    tableId: table.id, revision: revision.number, verdict: revision.verdict, ...more,
    passId: pass.id, aos: pass.aos.toISOString(), los: pass.los.toISOString(),
    spacecraft: { id: craft.id, name: craft.name }, station: { id: station.id, name: station.name }, link: { id: link.id, name: link.name, direction: link.direction },
    address: pageAddress(`/passes/${pass.id}`),
  }
}
