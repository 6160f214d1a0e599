import { sql } from 'drizzle-orm'
import { formatUtc } from '#shared/utils/format'
import type { Deps } from '../context'
import type { Cause } from './cause'
import { at, comingTables } from './coming-tables'

export interface FailedPublication { tableId: string, spacecraftId: string, spacecraftName: string, stationId: string, stationName: string, linkName: string, aos: Date, fault: string }

/** A publication that went wrong, as the schedule reports it. */
export function publicationFailed(failed: FailedPublication): Cause {
  return {
    kind: 'publication-failed',
    cause: `publication-failed:${failed.tableId}`,
    severity: 'call',
    title: `${failed.spacecraftName} at ${failed.stationName}: publishing ${failed.linkName} failed`,
    detail: `AOS ${formatUtc(failed.aos.getTime(), 'second')}. The station still has what it had before. The fault: ${failed.fault.slice(0, 300)}`,
    action: 'Open the table and publish it by hand. If that fails too, read it out to the station before AOS.',
    spacecraftId: failed.spacecraftId,
    stationId: failed.stationId,
    tableId: failed.tableId,
    dueAt: failed.aos,
    count: 1,
    weight: 1,
    raises: true,
  }
}

/** Standing alerts of failed publications whose table still waits, approved, for its pass. */
export async function findPublicationFailed({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<Cause[]> {
  const { rows } = await db.execute<{ cause: string }>(sql`
    SELECT DISTINCT a.cause FROM alerts a JOIN ${comingTables} ON t.id = a.table_id
    JOIN table_revisions r ON r.table_id = t.id AND r.state = 'approved'
    WHERE a.kind = 'publication-failed' AND p.aos > ${at(now)}`)
  return rows.map(({ cause }) => standing('publication-failed', cause))
}

/** That a cause stands, and nothing more. */
export function standing(kind: Cause['kind'], cause: string, count = 1): Cause {
  return { kind, cause, severity: 'call', title: '', detail: '', action: '', count, weight: 1, raises: false, keepsWords: true }
}
