import type { Limits } from './hold-paths'
import { earliestStarts } from './hold-paths'
import type { Holds } from './holds'
import { mirroredHolds } from './holds'
import { lastFree, mirroredQuiet, nextFree } from './quiet'

/** Rows of a plan: whole instants and grid multiples. */
export interface Path { readonly starts: readonly number[], readonly settings: readonly number[] }

/**
 * Of all paths of exactly `rows` holds, where fewer do not suffice, the one whose starts are earliest, in order, and among those
 * the one whose settings are lowest, in order; null where there is none.
 *
 * First, backwards, the latest instant at which each hold may start so that the rest still fits (reachable sets with time
 * mirrored); then, forwards, the earliest instant of each change and all holds that attain it.
 */
export function choosePath(holds: Holds, limits: Limits, rows: number): Path | null {
  const { setting, from, to, first, last } = holds
  const { quiet = [] } = limits
  const back = earliestStarts(mirroredHolds(holds), { ...limits, notBefore: -Infinity, quiet: mirroredQuiet(quiet) }, rows)
  if (!back.complete) return null

  /** Latest start of hold u as first of the last `left` rows. Mirrored, a start is the end of the row. */
  const latestStart = (u: number, left: number): number => {
    if (left === 1) return to[u]! >= last ? to[u]! : -Infinity
    const mirroredEnd = back.earliest(u, left)
    return mirroredEnd === Infinity ? -Infinity : Math.min(to[u]!, -mirroredEnd - limits.dwell)
  }
  const isGap = (time: number) => holds.gaps.some(([a, b]) => a <= time && time <= b)
  const mayChange = (v: number, u: number, time: number, left: number) =>
    time >= from[u]! && time <= to[v]! && time <= latestStart(u, left)
    && (Math.abs(setting[u]! - setting[v]!) <= limits.jump || isGap(time))
  /** Of holds that may be changed from, what any other asks of them: without a jump limit the one that lasts longest will do. */
  const leading = (some: readonly number[]) => limits.jump < Infinity || some.length === 0 ? some : [some.reduce((a, b) => to[b]! > to[a]! ? b : a)]

  const all = Array.from(setting.keys())
  const choices: number[][] = [all.filter(v => from[v]! <= first && to[v]! >= first)]
  const starts = [first]
  let leave = Math.max(limits.notBefore + limits.dwell, first + 1)
  for (let row = 2; row <= rows; row++) {
    const left = rows - row + 1
    const candidates = all.filter(u => to[u]! >= leave && latestStart(u, left) >= Math.max(leave, from[u]!))
    const before = leading(choices[row - 2]!)
    const start = earliestOf(holds, before, candidates, leave, u => latestStart(u, left), limits)
    if (start === Infinity) return null
    choices.push(candidates.filter(u => before.some(v => mayChange(v, u, start, left))))
    starts.push(start)
    leave = start + limits.dwell
  }
  starts[0] = lastFree(quiet, rows > 1 ? Math.min(first, starts[1]! - limits.dwell) : first)
  if (rows === 1) choices[0] = choices[0]!.filter(v => to[v]! >= last)

  for (let row = rows - 1; row >= 1; row--) {
    choices[row - 1] = choices[row - 1]!.filter(v => choices[row]!.some(u => mayChange(v, u, starts[row]!, rows - row)))
  }
  const path: number[] = []
  for (let row = 0; row < rows; row++) {
    const lowest = choices[row]!.find(u => row === 0 || mayChange(path[row - 1]!, u, starts[row]!, rows - row))
    if (lowest === undefined) return null
    path.push(lowest)
  }
  return { starts, settings: path.map(v => setting[v]!) }
}

function earliestOf(holds: Holds, some: readonly number[], candidates: readonly number[], leave: number, latest: (u: number) => number, { jump, quiet = [] }: Limits): number {
  let best = Infinity
  for (const u of candidates) {
    const least = nextFree(quiet, Math.max(leave, holds.from[u]!))
    if (least >= best) continue
    const most = latest(u)
    for (const v of some) {
      const end = Math.min(holds.to[v]!, most)
      if (least > end) continue
      if (Math.abs(holds.setting[u]! - holds.setting[v]!) <= jump) {
        best = Math.min(best, least)
        continue
      }
      for (const [a, b] of holds.gaps) {
        const inGap = nextFree(quiet, Math.max(a, least))
        if (inGap <= Math.min(b, end)) best = Math.min(best, inGap)
      }
    }
  }
  return best
}
