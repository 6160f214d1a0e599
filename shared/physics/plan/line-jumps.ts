import { startChoices } from './line-reach'
import type { LineTask } from './line-reach'
import type { LineChoice } from './lines'
import { linesOver } from './lines'
import { isWorkable } from './reach'
import { growingSides } from './sides'

/** Where a row may begin: an instant, with the values that one chain of rows before it has come to, in steps; any at the first. */
interface Place { readonly start: number, readonly least: number, readonly most: number, readonly from: Place | null }

/**
 * Starts of the fewest rows that keep a jump limit, over a choice of starts: at each, what the rows before can have come to is kept
 * as ranges, row by row, and a range that fewer rows have reached already is left out. Null where none of up to `limit` rows do.
 *
 * @card Ramps by search, jumps kept: fewest rows over a choice of starts where a jump limit binds.
 * @formula places (start, value) reachable by rows with |g − value| ≤ jump limit, breadth first
 * @source dynamic programming over reachable starts and values
 * @units ms, Hz → ms
 * @frame the radio’s dial
 * @range every whole instant up to 400 ms, 64 and those of furthest reach beyond; the slopes that are looked at
 * @tolerance as few as trying every plan finds (plan/ramp-path.test.ts)
 */
export function searchedWithJumps(task: LineTask, limit: number, jumpHz: number, hints: readonly number[]): number[] | null {
  const { corridor: c, slopes, dwell, first } = task
  const { stepHz } = c.grid
  const jump = jumpHz / stepHz
  const choices = startChoices(task, hints)
  const known = new Map<number, Place[]>()
  const linesFrom = new Map<number, (end: number) => readonly LineChoice[]>()
  const linesTo = (start: number, end: number): readonly LineChoice[] => {
    let from = linesFrom.get(start)
    if (!from) linesFrom.set(start, from = linesAtEnds(task, start))
    return from(end)
  }
  /** Settings of a line that follow a place; empty when the first is above the second. */
  const settingsFrom = (place: Place, { least, most }: LineChoice): readonly [number, number] => {
    if (place.from === null || !isWorkable(c, place.start)) return [least, most]
    // A jump below half a step leads to a setting only from close beside it.
    if (jump < 0.5 && Math.abs(place.least - Math.round(place.least)) > jump + 1e-9) return [Infinity, -Infinity]
    return [Math.max(least, Math.ceil(place.least - jump - 1e-9)), Math.min(most, Math.floor(place.most + jump + 1e-9))]
  }
  const covers = (other: Place, place: Place): boolean => other.least <= place.least && other.most >= place.most
    && (jump >= 0.5 || Math.abs(other.least - place.least - Math.round(other.least - place.least)) < 1e-9)

  let layer: Place[] = [{ start: first, least: -Infinity, most: Infinity, from: null }]
  for (let rows = 1; rows <= limit && layer.length > 0; rows++) {
    for (const place of layer) {
      const isLast = linesTo(place.start, Infinity).some((line) => {
        const [least, most] = settingsFrom(place, line)
        return least <= most
      })
      if (isLast) return startsOf(place)
    }
    if (rows === limit) break
    const next: Place[] = []
    for (const place of layer) {
      for (const end of choices) {
        if (end < place.start + dwell) continue
        const all = linesTo(place.start, end)
        // What serves for long serves for less of it, from the same start.
        if (all.length === 0) break
        const ranges = all.flatMap((line) => {
          const [least, most] = settingsFrom(place, line)
          const moved = line.slope * slopes.stepHzPerS * (end - place.start) / 1000 / stepHz
          return least > most ? [] : [[least + moved, most + moved] as const]
        })
        for (const [least, most] of jump < 0.5 ? ranges : joined(ranges, jump >= 1 ? 1 : 0)) {
          const reached = { start: end, least, most, from: place }
          const there = known.get(end) ?? []
          if (there.some(other => covers(other, reached))) continue
          known.set(end, [...there.filter(other => !covers(reached, other)), reached])
          next.push(reached)
        }
      }
    }
    layer = next.filter(place => known.get(place.start)!.includes(place))
  }
  return null
}

/** Lines from one start, each end asked once. */
function linesAtEnds({ corridor, slopes, bounds }: LineTask, start: number): (end: number) => readonly LineChoice[] {
  const sidesTo = growingSides(corridor, start)
  const found = new Map<number, readonly LineChoice[]>()
  return (end) => {
    let lines = found.get(end)
    if (!lines) found.set(end, lines = linesOver(corridor, start, end, slopes, bounds, sidesTo(end)))
    return lines
  }
}

type Range = readonly [least: number, most: number]

/** Ranges in order, those at most `gap` apart as one: a jump leads as far from one as from the other. */
function joined(ranges: readonly Range[], gap: number): Range[] {
  const all: [number, number][] = []
  for (const [least, most] of [...ranges].sort((a, b) => a[0] - b[0])) {
    const last = all[all.length - 1]
    if (last && least <= last[1] + gap) last[1] = Math.max(last[1], most)
    else all.push([least, most])
  }
  return all
}

function startsOf(place: Place): number[] {
  return place.from === null ? [place.start] : [...startsOf(place.from), place.start]
}
