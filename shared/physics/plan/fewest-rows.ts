import type { Path } from './choose-path'
import { choosePath } from './choose-path'
import type { Corridor } from './corridor'
import { mirrored } from './corridor'
import type { Limits } from './hold-paths'
import { earliestStarts } from './hold-paths'
import type { Holds } from './holds'
import { holdsOf } from './holds'
import { lastFree, mirroredQuiet } from './quiet'
import { furthestReach, isWorkable, settingsOver } from './reach'

/**
 * Fewest rows through a corridor. Furthest reach is tried first: without dwell and jump limit it is optimal, so where its rows
 * happen to keep both, it is optimal with them too, and where it needs too many rows, so does every plan. Only in between are
 * the paths from hold to hold searched.
 */
export function fewestRows(c: Corridor, limits: Limits, limit = Infinity): number | null {
  const starts = furthestReach(c, firstInstant(c), limit, limits.quiet)
  if (starts === null) return null
  if (keepsDwell(starts, limits) && (limits.jump === Infinity || settingsFor(c, starts, limits.jump) !== null)) return starts.length
  const { rows, complete } = earliestStarts(holdsFor(c, limits), limits, limit)
  return complete ? rows : null
}

/** Of all plans with `rows` rows, where fewer do not suffice: the earliest starts, in order, then the lowest settings, in order. */
export function chooseRows(c: Corridor, limits: Limits, rows: number): Path | null {
  const back = furthestReach(mirrored(c), -lastInstant(c), rows, mirroredQuiet(limits.quiet ?? []))
  if (back === null) return null
  const starts = [firstInstant(c), ...back.slice(1).map(time => -time).reverse()]
  if (keepsDwell(starts, limits)) {
    const settings = settingsFor(c, starts, limits.jump)
    if (settings !== null) {
      starts[0] = lastFree(limits.quiet ?? [], rows > 1 ? Math.min(starts[0]!, starts[1]! - limits.dwell) : starts[0]!)
      return { starts, settings }
    }
  }
  return choosePath(holdsFor(c, limits), limits, rows)
}

function firstInstant(c: Corridor): number {
  return Math.floor(c.timeMs[0]!)
}

function lastInstant(c: Corridor): number {
  return Math.ceil(c.timeMs[c.timeMs.length - 1]!)
}

function keepsDwell(starts: readonly number[], { dwell, notBefore }: Limits): boolean {
  // The first row can take effect earlier than needed, so only the bound on it counts.
  return starts.every((start, i) => i === 0 || start - (i === 1 ? notBefore : starts[i - 1]!) >= dwell)
}

/** The lowest settings, in order, for given starts, each jump within `jump`; null where none do. */
function settingsFor(c: Corridor, starts: readonly number[], jump: number): number[] | null {
  const ranges = starts.map((start, i) => settingsOver(c, start, starts[i + 1] ?? Infinity))
  const jumps = starts.map(start => isWorkable(c, start) ? jump : Infinity)
  for (let i = ranges.length - 2; i >= 0; i--) {
    const [least, most] = ranges[i]!
    const [nextLeast, nextMost] = ranges[i + 1]!
    ranges[i] = [Math.max(least, nextLeast - jumps[i + 1]!), Math.min(most, nextMost + jumps[i + 1]!)]
  }
  const settings: number[] = []
  for (const [i, [least, most]] of ranges.entries()) {
    const lowest = i === 0 ? least : Math.max(least, settings[i - 1]! - jumps[i]!)
    if (lowest > most) return null
    settings.push(lowest)
  }
  return settings
}

/** Pairs of neighbouring grid points that a search may look at, and grid points where no jump limit binds. */
const MOST_PAIRS = 200_000
const MOST_POINTS = 8_000

/**
 * Holds of the corridor. A grid so fine that the search would look at too many points or pairs of them is thinned to every n-th
 * point, n a divisor of the jump limit so that the largest jump stays in reach: least rows and least ratio are then those of the
 * thinned grid, which costs at most n/2 steps of the half-width.
 */
function holdsFor(c: Corridor, { jump }: Limits): Holds {
  let lowest = Infinity
  let highest = -Infinity
  let widest = 0
  for (let j = 0; j < c.lowHz.length; j++) {
    lowest = Math.min(lowest, c.lowHz[j]!)
    highest = Math.max(highest, c.highHz[j]!)
    widest = Math.max(widest, c.highHz[j]! - c.lowHz[j]!)
  }
  const points = Math.min(c.grid.most - c.grid.least, (highest - lowest) / c.grid.stepHz) + 1
  if (jump === Infinity) return holdsOf(c, Math.max(1, Math.floor(points / MOST_POINTS)))
  // Both settings hold at a retune, so no jump is wider than the corridor.
  const reach = Math.min(jump, Math.ceil(widest / c.grid.stepHz), points)
  let stride = Math.max(1, Math.floor(Math.sqrt(points * reach / MOST_PAIRS)))
  if (stride > 1) while (stride < jump && jump % stride !== 0) stride++
  return holdsOf(c, stride)
}
