import type { TableOut } from '#shared/schemas/tables'

export type PartKind = 'known' | 'limit' | 'spread'
export interface BudgetPart {
  readonly key: 'steps' | 'timing' | 'ut1' | 'orbit' | 'oscillator' | 'trim'
  readonly name: string
  readonly kind: PartKind
  /** By itself: the step, the limit, or k times the spread, Hz. */
  readonly aloneHz: number
  /** What it adds to the bar, Hz; the parts add up to the budgeted residual. */
  readonly addsHz: number
}

/**
 * The worst residual's parts, laid end to end: |steps| + timing + UT1 + k·√(orbit² + oscillator² + trim²).
 * The root of squares is shared out by variance, k·σᵢ²/√Σσ², so that the parts add up to the whole exactly.
 * @param budget hertz; orbit, oscillator and trim one sigma
 */
export function budgetParts({ stepsHz, timingHz, ut1Hz, orbitHz, oscillatorHz, trimHz }: TableOut['budget'], k: number): { parts: BudgetPart[], totalHz: number } {
  const sigma = Math.hypot(orbitHz, oscillatorHz, trimHz)
  const spread = (key: BudgetPart['key'], name: string, hz: number): BudgetPart => ({ key, name, kind: 'spread', aloneHz: k * Math.abs(hz), addsHz: sigma > 0 ? k * hz * hz / sigma : 0 })
  const sure = (key: BudgetPart['key'], name: string, kind: PartKind, hz: number): BudgetPart => ({ key, name, kind, aloneHz: Math.abs(hz), addsHz: Math.abs(hz) })
  const parts = [
    sure('steps', 'Steps', 'known', stepsHz),
    sure('timing', 'Timing', 'limit', timingHz),
    sure('ut1', 'UT1', 'limit', ut1Hz),
    spread('orbit', 'Orbit', orbitHz),
    spread('oscillator', 'Oscillators', oscillatorHz),
    spread('trim', 'Trim', trimHz),
  ]
  return { parts, totalHz: parts.reduce((sum, part) => sum + part.addsHz, 0) }
}
