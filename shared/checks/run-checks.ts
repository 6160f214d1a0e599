import { computations } from './compute'
import type { OutsideValues, Place } from './values'
import { outsideValues } from './values'

export interface CheckResult {
  /** Of its group and place in it. */
  readonly key: string
  readonly place: Place
  readonly card: string
  readonly what: string
  readonly unit: string
  readonly decimals: number
  readonly expected: number
  /** Null where the code gave no number; `failure` says why. */
  readonly computed: number | null
  readonly failure: string | null
  /** In the unit. */
  readonly tolerance: number
  readonly source: string
  readonly isOk: boolean
}

/** Puts the running code to every value from outside. Pure, some tens of milliseconds. A computation that throws is a check that does not hold. */
export function runChecks(groups: readonly OutsideValues[] = outsideValues, compute: Record<string, (at: number) => number> = computations): CheckResult[] {
  return groups.flatMap(group => group.values.map(([at, expected, words], i): CheckResult => {
    const tolerance = group.isShare ? Math.abs(expected) * group.tolerance : group.tolerance
    const { computed, failure } = attempt(compute[group.id], at)
    return {
      key: `${group.id}-${i}`, place: group.place, card: group.card, what: group.what.replace('{at}', words ?? String(at)), unit: group.unit, decimals: group.decimals,
      expected, computed, failure, tolerance, source: group.source,
      isOk: computed !== null && Math.abs(computed - expected) <= tolerance,
    }
  }))
}

function attempt(compute: ((at: number) => number) | undefined, at: number): Pick<CheckResult, 'computed' | 'failure'> {
  if (!compute) return { computed: null, failure: 'Nothing computes it.' }
  try {
    const computed = compute(at)
    return Number.isFinite(computed) ? { computed, failure: null } : { computed: null, failure: 'It gives no number.' }
  }
  catch (error) {
    return { computed: null, failure: error instanceof Error ? error.message : String(error) }
  }
}
