import type { LineTask } from './line-reach'
import type { LineChoice } from './lines'
import { linesOver } from './lines'
import { isWorkable } from './reach'

/** Rows that ramp: instants of effect, grid multiples there, multiples of the slope's step. */
export interface LinePath { readonly starts: readonly number[], readonly settings: readonly number[], readonly slopes: readonly number[] }

type Intervals = readonly (readonly [least: number, most: number])[]
interface Kept { readonly slope: number, readonly settings: Intervals }

/**
 * The lowest settings for given starts, each jump at a workable instant within `jumpHz`; null where none do. From the last row back,
 * the settings of every slope from which the rest can be reached; then forwards the lowest, row by row.
 *
 * @card Settings in a chain: the lowest whose jumps a loop bears.
 * @formula |g_{i+1} − g_i − s_i·(e_{i+1} − e_i)| ≤ jump limit at workable instants
 * @source dynamic programming, last row first
 * @units ms, Hz, Hz/s → multiples of q and σ
 * @frame the radio’s dial
 * @range given starts
 * @tolerance never a jump beyond the limit (plan/ramp-path.test.ts)
 */
export function chainOf(task: LineTask, starts: readonly number[], jumpHz: number): LinePath | null {
  const { corridor: c, slopes: { stepHzPerS }, bounds, slopes } = task
  const q = c.grid.stepHz
  const ends = starts.map((start, i) => starts[i + 1] ?? Infinity)
  const choices = starts.map((start, i) => linesOver(c, start, ends[i]!, slopes, bounds))
  const bindsAt = (i: number) => jumpHz < Infinity && isWorkable(c, starts[i]!)
  /** By how much a line has moved from its start to the next, in steps. */
  const moved = (i: number, slope: number) => slope * stepHzPerS * (ends[i]! - starts[i]!) / 1000 / q

  const kept: Kept[][] = []
  for (let i = starts.length - 1; i >= 0; i--) {
    const next = kept[0]
    kept.unshift(choices[i]!.map(choice => ({
      slope: choice.slope,
      settings: next && bindsAt(i + 1) ? leadingTo(choice, next, moved(i, choice.slope), jumpHz / q) : [[choice.least, choice.most]] as Intervals,
    })).filter(line => line.settings.length > 0))
    if (kept[0]!.length === 0) return null
  }
  const [settings, chosen]: [number[], number[]] = [[], []]
  for (const [i, lines] of kept.entries()) {
    const from = i === 0 ? 0 : settings[i - 1]! + moved(i - 1, chosen[i - 1]!)
    const [least, most] = i > 0 && bindsAt(i) ? [Math.ceil(from - jumpHz / q - 1e-9), Math.floor(from + jumpHz / q + 1e-9)] : [-Infinity, Infinity]
    let lowest: [setting: number, slope: number] | null = null
    for (const line of lines) {
      const setting = lowestIn(line.settings, least, most)
      if (setting !== null && (lowest === null || setting < lowest[0] || (setting === lowest[0] && line.slope < lowest[1]))) lowest = [setting, line.slope]
    }
    if (lowest === null) return null
    settings.push(lowest[0])
    chosen.push(lowest[1])
  }
  return { starts, settings, slopes: chosen }
}

/** Settings of one slope from which some kept setting of the next row is within the jump. */
function leadingTo({ least, most }: LineChoice, next: readonly Kept[], moved: number, jump: number): Intervals {
  const found: [number, number][] = []
  // A jump below half a step leads to a setting only from close beside it.
  if (jump < 0.5 && Math.abs(moved - Math.round(moved)) > jump + 1e-9) return found
  for (const { settings } of next) {
    for (const [low, high] of settings) {
      const from = Math.max(least, Math.ceil(low - jump - moved - 1e-9))
      const to = Math.min(most, Math.floor(high + jump - moved + 1e-9))
      if (from <= to) found.push([from, to])
    }
  }
  found.sort((a, b) => a[0] - b[0])
  const joined: [number, number][] = []
  for (const [from, to] of found) {
    const last = joined[joined.length - 1]
    if (last && from <= last[1] + 1) last[1] = Math.max(last[1], to)
    else joined.push([from, to])
  }
  return joined
}

function lowestIn(intervals: Intervals, least: number, most: number): number | null {
  for (const [low, high] of intervals) if (Math.max(low, least) <= Math.min(high, most)) return Math.max(low, least)
  return null
}
