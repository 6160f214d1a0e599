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

/**
 * Earliest start of every hold after 1, 2, … rows: layer k−1 holds, for each hold, the earliest instant at which it can be the
 * k-th or an earlier row; Infinity where it cannot. The sets of reachable starts of the published recursion
 * R_{k+1} = ∪[e + dwell, reach(e)], kept per grid point. Ends with the first layer in which a hold lasts to the end (`complete`),
 * or where no layer improves, or after `limit` rows.
 */
export function earliestStarts(holds: Holds, limits: Limits, limit: number): { layers: Float64Array[], complete: boolean } {
  const { from, to, first, last } = holds
  const count = from.length
  let layer: Float64Array = new Float64Array(count).fill(Infinity)
  let frontier: number[] = []
  for (let v = 0; v < count; v++) {
    if (from[v]! > first) continue
    layer[v] = limits.notBefore
    frontier.push(v)
  }
  const layers = [layer]
  while (frontier.length > 0) {
    if (frontier.some(v => to[v]! >= last)) return { layers, complete: true }
    if (layers.length >= limit) break
    const next = Float64Array.from(layer)
    const improved: number[] = []
    for (const v of frontier) {
      const leave = Math.max(layer[v]! + limits.dwell, first + 1)
      const until = to[v]!
      if (leave > until) continue
      const [begin, end] = neighbours(holds, v, leave, limits.jump)
      for (let u = begin; u < end; u++) {
        const known = next[u]!
        if (from[u]! >= known || from[u]! > until || to[u]! < leave) continue
        const start = earliestChange(holds, v, u, leave, limits)
        if (start >= known) continue
        if (known === layer[u]) improved.push(u)
        next[u] = start
      }
    }
    frontier = improved
    if (frontier.length === 0) break
    layer = next
    layers.push(layer)
  }
  return { layers, complete: false }
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
