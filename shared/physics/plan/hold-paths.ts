import type { Holds } from './holds'
import type { QuietStretches } from './quiet'
import { nextFree } from './quiet'

/** What binds from one row to the next, whole milliseconds and grid multiples. */
export interface Limits {
  readonly dwell: number
  /** Largest jump at a retune within a workable part, in grid steps; Infinity for none. */
  readonly jump: number
  /** The first row may not take effect before this; −Infinity for no such bound. */
  readonly notBefore: number
  /** No row takes effect inside; left out for none. */
  readonly quiet?: QuietStretches
}

/** Earliest starts of holds by numbers of rows. */
export interface Starts {
  /** Rows after which nothing is gained any more, or a hold lasts to the end (`complete`). */
  readonly rows: number
  readonly complete: boolean
  /** Earliest instant at which a hold can be the `row`-th or an earlier one; Infinity where it cannot. */
  readonly earliest: (hold: number, row: number) => number
}

/**
 * Earliest start of every hold after 1, 2, … rows: the sets of reachable starts of the published recursion
 * R_{k+1} = ∪[e + dwell, reach(e)], kept per grid point. Ends with the first row in which a hold lasts to the end (`complete`),
 * or where no row improves, or after `limit` rows.
 */
export function earliestStarts(holds: Holds, limits: Limits, limit: number): Starts {
  const { from, to, first, last } = holds
  const count = from.length
  /** Newest improvement of each hold, each with the one before it. */
  const newest = new Int32Array(count).fill(-1)
  const start: number[] = []
  const ofRow: number[] = []
  const before: number[] = []
  const improve = (v: number, row: number, at: number): void => {
    before.push(newest[v]!)
    newest[v] = start.length
    start.push(at)
    ofRow.push(row)
  }
  const known = new Float64Array(count).fill(Infinity)
  let frontier: number[] = []
  for (let v = 0; v < count; v++) {
    if (from[v]! > first) continue
    known[v] = limits.notBefore
    improve(v, 1, limits.notBefore)
    frontier.push(v)
  }
  let rows = 1
  let complete = false
  while (frontier.length > 0) {
    complete = frontier.some(v => to[v]! >= last)
    if (complete || rows >= limit) break
    rows++
    // What a row starts from are the starts before it, whatever it improves itself.
    const leaves = frontier.map(v => Math.max(known[v]! + limits.dwell, first + 1))
    const improved: number[] = []
    const reach = (u: number, at: number): void => {
      if (newest[u] === -1 || ofRow[newest[u]!] !== rows) {
        improved.push(u)
        improve(u, rows, at)
      }
      else start[newest[u]!] = at
      known[u] = at
    }
    if (limits.jump === Infinity) fromAny(holds, frontier, leaves, limits, known, reach)
    else fromNeighbours(holds, frontier, leaves, limits, known, reach)
    if (improved.length === 0) rows--
    frontier = improved
  }
  return {
    rows, complete,
    earliest: (hold, row) => {
      let entry = newest[hold]!
      while (entry >= 0 && ofRow[entry]! > row) entry = before[entry]!
      return entry < 0 ? Infinity : start[entry]!
    },
  }
}

type Reach = (hold: number, at: number) => void

/** Where any hold may follow any other: it can begin wherever one of them may be left. */
function fromAny({ from, to }: Holds, frontier: readonly number[], leaves: readonly number[], { quiet = [] }: Limits, known: Float64Array, reach: Reach): void {
  const open = frontier.map((v, i) => [leaves[i]!, to[v]!] as const).filter(([leave, end]) => leave <= end).sort((a, b) => a[0] - b[0])
  const spans: [number, number][] = []
  for (const [leave, end] of open) {
    const last = spans[spans.length - 1]
    if (last && leave <= last[1] + 1) last[1] = Math.max(last[1], end)
    else spans.push([leave, end])
  }
  if (spans.length === 0) return
  const [soonest, latest] = [spans[0]![0], spans[spans.length - 1]![1]]
  for (let u = 0; u < from.length; u++) {
    if (to[u]! < soonest || from[u]! > latest || known[u]! <= soonest) continue
    for (const [leave, end] of spans) {
      if (end < from[u]!) continue
      const at = nextFree(quiet, Math.max(leave, from[u]!))
      if (at > to[u]! || at >= known[u]!) break
      if (at > end) continue
      reach(u, at)
      break
    }
  }
}

/** Where a jump limit binds: from each hold to those within it. */
function fromNeighbours(holds: Holds, frontier: readonly number[], leaves: readonly number[], limits: Limits, known: Float64Array, reach: Reach): void {
  const { from, to } = holds
  for (let i = 0; i < frontier.length; i++) {
    const v = frontier[i]!
    const leave = leaves[i]!
    const until = to[v]!
    if (leave > until) continue
    const [begin, end] = neighbours(holds, v, leave, limits.jump)
    for (let u = begin; u < end; u++) {
      if (from[u]! >= known[u]! || leave >= known[u]! || from[u]! > until || to[u]! < leave) continue
      const at = earliestChange(holds, v, u, leave, limits)
      if (at < known[u]!) reach(u, at)
    }
  }
}

/** Earliest change from hold v to hold u at or after `leave`; Infinity where none keeps to the holds and the jump limit. */
export function earliestChange(holds: Holds, v: number, u: number, leave: number, { jump, quiet = [] }: Limits): number {
  const start = nextFree(quiet, Math.max(leave, holds.from[u]!))
  const end = Math.min(holds.to[v]!, holds.to[u]!)
  if (start > end) return Infinity
  if (Math.abs(holds.setting[u]! - holds.setting[v]!) <= jump) return start
  // Between workable parts nothing listens, so no jump is too large there.
  for (const [a, b] of holds.gaps) {
    const inGap = nextFree(quiet, Math.max(a, start))
    if (inGap <= Math.min(b, end)) return inGap
  }
  return Infinity
}

/** Range of holds that a change from v can lead to: all of them once a gap lies ahead, else those within the jump limit. */
export function neighbours(holds: Holds, v: number, leave: number, jump: number): [begin: number, end: number] {
  if (jump === Infinity || holds.gaps.some(([a, b]) => a <= holds.to[v]! && b >= leave)) return [0, holds.setting.length]
  return [firstAtOrAbove(holds.setting, holds.setting[v]! - jump), firstAtOrAbove(holds.setting, holds.setting[v]! + jump + 1)]
}

function firstAtOrAbove(sorted: Float64Array, value: number): number {
  let below = -1
  let above = sorted.length
  while (above - below > 1) {
    const middle = (below + above) >> 1
    if (sorted[middle]! < value) below = middle
    else above = middle
  }
  return above
}
