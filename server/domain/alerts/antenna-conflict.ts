import { formatUtc } from '#shared/utils/format'
import { defaultOf, findConflicts } from '../antennas/find-conflicts'
import type { Deps } from '../context'
import type { Cause, CauseScope } from './cause'

/** Called for this long before the passes; what lies further ahead stands on the page of the night. */
const aheadMs = 3 * 3600_000
/** A gap shorter than this keeps an alert standing, so that elements that move a pass by seconds do not open and close it in turn. */
const closingGapMs = 30_000

/** Pairs of coming passes that want one antenna, which nobody has given to either. */
export async function findAntennaConflicts({ db, now }: Pick<Deps, 'db' | 'now'>, scope: CauseScope = {}): Promise<Cause[]> {
  const conflicts = await findConflicts({ db }, { from: now, to: new Date(now.getTime() + aheadMs), stationId: scope.stationId }, closingGapMs)
  return conflicts.filter(({ pair, decision }) => decision === null && pair.every(want => want.aosMs > now.getTime())).map(({ pair, overlapMs }) => {
    const [first, second] = pair
    const has = defaultOf(pair)
    const other = has === first ? second : first
    return {
      kind: 'antenna-conflict',
      cause: `antenna-conflict:${first.antennaId}:${[first.passId, second.passId].sort().join(':')}`,
      severity: 'notice',
      title: `${first.stationName}: ${first.spacecraftName} and ${second.spacecraftName} both want ${first.antennaName}`,
      detail: `${first.spacecraftName} from ${formatUtc(first.busyFromMs, 'second')}, ${second.spacecraftName} from ${formatUtc(second.busyFromMs, 'second')}, set-up of ${first.setupS} s included. Unless somebody decides, ${has.spacecraftName} has it (${has.priority === other.priority ? 'of equal priority, by its earlier AOS' : `priority ${has.priority} over ${other.priority}`}) and ${other.spacecraftName} stands down.`,
      action: 'Give the antenna to one of them on the page of the night.',
      stationId: first.stationId,
      tableId: first.tables[0]!.id,
      dueAt: new Date(first.aosMs),
      count: 1,
      weight: 1,
      raises: overlapMs > 0,
    } satisfies Cause
  })
}
