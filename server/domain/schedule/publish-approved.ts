import type { Deps } from '../context'
import { isUnavailable } from '../errors'
import { publicationFailed } from '../alerts/publication-failed'
import { raiseCause } from '../alerts/raise-cause'
import type { Refusal } from '../tables/publish-revision'
import { publishRevision } from '../tables/publish-revision'

export interface DueTable { tableId: string, spacecraftId: string, spacecraftName: string, stationId: string, stationName: string, linkName: string, aos: Date }
export interface Published {
  published: number
  failed: number
  refused: Partial<Record<Refusal, number>>
  /** What was said of tables that left the antenna to another pass, or wait for it to be given. */
  antennas: string[]
}

/** Publishes tables one by one: one that fails is undone by itself, raises its alert, and stops none of the others. */
export async function publishApproved(deps: Deps, due: readonly DueTable[]): Promise<Published> {
  const done: Published = { published: 0, failed: 0, refused: {}, antennas: [] }
  for (const table of due) {
    try {
      const result = await publishRevision(deps, { tableId: table.tableId, mover: 'schedule' })
      const { outcome } = result
      if (outcome === 'published') done.published++
      else done.refused[outcome] = (done.refused[outcome] ?? 0) + 1
      if (outcome === 'stands-down' || outcome === 'antenna-wanted') done.antennas.push(`${table.spacecraftName}, ${table.linkName}: ${result.detail.replace(/^S/, 's').replace(/\.$/, '')}`)
    }
    catch (error) {
      // The database, not the table, is what failed: the whole slot is tried again.
      if (isUnavailable(error)) throw error
      done.failed++
      await raiseCause(deps, publicationFailed({ ...table, fault: faultOf(error) }))
    }
  }
  return done
}

/** The innermost message: a driver's error carries the query, which is nobody's business in a mail. */
function faultOf(error: unknown): string {
  let fault = error
  while (fault instanceof Error && fault.cause instanceof Error) fault = fault.cause
  return fault instanceof Error ? fault.message : String(fault)
}

export function describePublished({ published, failed, refused, antennas }: Published): string {
  const words = [published === 0 ? 'Nothing to publish' : published === 1 ? 'Published 1 table' : `Published ${published} tables`]
  if (failed > 0) words.push(`${failed} failed`)
  const waiting = (refused['needs-second-person'] ?? 0)
  if (waiting > 0) words.push(`${waiting} without the second person that a breaking table needs`)
  if (refused.stale) words.push(`${refused.stale} not computed anew in time`)
  return [words.join(', '), ...antennas.slice(0, 20)].join('; ')
}
