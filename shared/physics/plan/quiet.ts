/** Closed stretches of whole instants, apart from each other and in order, in which no row may take effect. */
export type QuietStretches = readonly (readonly [from: number, to: number])[]

/**
 * Spans as whole instants of a plan, in order, those that touch joined. `anchorMs` is instant 0.
 *
 * @card Quiet stretches: spans in which no row takes effect, as whole instants of a plan.
 * @formula [⌈from⌉, ⌊to⌋], those that touch joined
 * @source mechanics
 * @units UTC ms → ms from the plan’s anchor
 * @frame none
 * @range any spans, in any order
 * @tolerance exact: no retune falls inside (predict/quiet.test.ts)
 */
export function quietStretches(spans: readonly { readonly fromMs: number, readonly toMs: number }[], anchorMs: number): QuietStretches {
  const sorted = spans.map(({ fromMs, toMs }) => [Math.ceil(fromMs - anchorMs), Math.floor(toMs - anchorMs)] as const)
    .filter(([from, to]) => from <= to).sort((a, b) => a[0] - b[0])
  const joined: [number, number][] = []
  for (const [from, to] of sorted) {
    const last = joined[joined.length - 1]
    if (last && from <= last[1] + 1) last[1] = Math.max(last[1], to)
    else joined.push([from, to])
  }
  return joined
}

/**
 * The same with time running backwards.
 *
 * @card Quiet stretches backwards: the same with time mirrored.
 * @formula [−to, −from]
 * @source mechanics
 * @units ms → ms
 * @frame none
 * @range stretches in order
 * @tolerance exact (plan/best-path.test.ts, against every plan)
 */
export const mirroredQuiet = (quiet: QuietStretches): QuietStretches => quiet.map(([from, to]) => [-to, -from] as const).reverse()

/**
 * First instant at or after `time` at which a row may take effect.
 *
 * @card Next free instant: where a row may take effect after a quiet stretch.
 * @formula to + 1 within [from, to]
 * @source mechanics
 * @units ms → ms
 * @frame none
 * @range stretches apart from each other
 * @tolerance exact (plan/best-path.test.ts, against every plan)
 */
export function nextFree(quiet: QuietStretches, time: number): number {
  for (const [from, to] of quiet) if (time >= from && time <= to) return to + 1
  return time
}

/**
 * Last instant at or before `time` at which a row may take effect.
 *
 * @card Last free instant: where a row may take effect before a quiet stretch.
 * @formula from − 1 within [from, to]
 * @source mechanics
 * @units ms → ms
 * @frame none
 * @range stretches apart from each other
 * @tolerance exact (plan/best-path.test.ts, against every plan)
 */
export function lastFree(quiet: QuietStretches, time: number): number {
  for (const [from, to] of quiet) if (time >= from && time <= to) return from - 1
  return time
}
