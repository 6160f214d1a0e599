import type { AlongTrackModel } from '#shared/physics/accuracy/prior'
import { perigeeHeightKm } from '#shared/physics/accuracy/prior'
import { neededOverCarrierMinusOne } from '#shared/physics/doppler/ratio'
import { createEphemeris } from '#shared/physics/orbit/ephemeris'
import { findPasses } from '#shared/physics/orbit/passes'
import { createPropagator } from '#shared/physics/orbit/propagator'
import type { Direction, Ephemeris, MeanElements, PredictedPass, Propagator, Site, UtcMs } from '#shared/physics/types'
import { identityToleranceMs, matchPasses } from '~~/server/domain/prediction/match-passes'
import type { SetWarning } from './set-warnings'
import { warningsAgainst, warningsOfSet } from './set-warnings'

export interface CompareInput {
  readonly candidate: { readonly elements: MeanElements, readonly accuracy: AlongTrackModel | null }
  readonly inUse: { readonly elements: MeanElements, readonly accuracy: AlongTrackModel } | null
  readonly stations: readonly { readonly id: string, readonly site: Site }[]
  readonly links: readonly { readonly id: string, readonly direction: Direction, readonly carrierHz: number }[]
  readonly fromMs: UtcMs
  readonly toMs: UtcMs
  /** Until when decay is looked for. */
  readonly horizonEndMs: UtcMs
  readonly ut1MinusUtcS: number
}

export interface ComparedPass {
  readonly stationId: string
  readonly aosMs: UtcMs
  readonly presence: 'both' | 'new' | 'gone'
  /** New minus old; null where there is one pass only, or the window cuts it. */
  readonly aosShiftS: number | null
  readonly culminationShiftS: number | null
  readonly losShiftS: number | null
  readonly maxElevationShiftDeg: number | null
  /** Largest |new − old| of the needed frequency over the span common to both. */
  readonly links: readonly { readonly id: string, readonly worstShiftHz: number }[]
}

/** Spacing at which two curves are held against each other: their difference turns slowly even overhead. */
const STEP_MS = 2000
const MOST_STEPS = 1000

/** Shift of prediction of the coming passes when `candidate` takes the place of the set in use, and what speaks against it. */
export function compareSets(input: CompareInput): { warnings: SetWarning[], passes: ComparedPass[] } {
  const made = createPropagator(input.candidate.elements)
  if (!made.ok) return { warnings: [{ code: 'unusable', message: 'SGP4 fails with this set at its own epoch; it cannot be put into use.' }], passes: [] }
  const candidate = made.propagator
  const warnings = warningsOfSet(candidate.elements, perigeeHeightKm(candidate.elements), createEphemeris(candidate, input.fromMs, input.horizonEndMs))
  const former = input.inUse && createPropagator(input.inUse.elements)
  const inUse = former?.ok ? former.propagator : null
  if (inUse && input.inUse && input.candidate.accuracy) {
    warnings.unshift(...warningsAgainst({ candidate, inUse, candidateAccuracy: input.candidate.accuracy, inUseAccuracy: input.inUse.accuracy }))
  }
  // A period more on either side: a pass at the window's edge is then seen whole and finds its counterpart.
  const padMs = 86_400_000 / candidate.elements.meanMotionRevPerDay
  const over = (propagator: Propagator) => createEphemeris(propagator, input.fromMs - padMs, input.toMs + padMs)
  const [mine, old] = [over(candidate), inUse && over(inUse)]
  const passes = input.stations.flatMap(station => compareAt(station, mine, old, input, padMs))
  return { warnings, passes: passes.sort((a, b) => a.aosMs - b.aosMs) }
}

function compareAt({ id, site }: CompareInput['stations'][number], mine: Ephemeris, old: Ephemeris | null, input: CompareInput, padMs: number): ComparedPass[] {
  const { fromMs, toMs, ut1MinusUtcS } = input
  const passesOf = (ephemeris: Ephemeris | null) => ephemeris ? findPasses({ ephemeris, site, fromMs: fromMs - padMs, toMs: toMs + padMs, ut1MinusUtcS }).passes : []
  const isComing = (pass: PredictedPass) => pass.losMs > fromMs && pass.aosMs < toMs
  const nothing = { stationId: id, aosShiftS: null, culminationShiftS: null, losShiftS: null, maxElevationShiftDeg: null, links: [] }
  return pairsOf(passesOf(mine), passesOf(old), identityToleranceMs(input.candidate.elements.meanMotionRevPerDay)).flatMap(([now, before]): ComparedPass[] => {
    if (now && before) {
      if (!isComing(now) && !isComing(before)) return []
      const aos = now.aosClipped || before.aosClipped ? null : (now.aosMs - before.aosMs) / 1000
      const los = now.losClipped || before.losClipped ? null : (now.losMs - before.losMs) / 1000
      const whole = aos !== null && los !== null
      return [{
        stationId: id, aosMs: now.aosMs, presence: 'both', aosShiftS: aos, losShiftS: los,
        culminationShiftS: whole ? (now.culminationMs - before.culminationMs) / 1000 : null,
        maxElevationShiftDeg: whole ? (now.maxElevationRad - before.maxElevationRad) * 180 / Math.PI : null,
        links: shiftsOfLinks(now, before, site, mine, old!, input),
      }]
    }
    const [only, presence] = now ? [now, 'new' as const] : [before!, 'gone' as const]
    return isComing(only) ? [{ ...nothing, aosMs: only.aosMs, presence }] : []
  })
}

/** Each pass beside its former self, by the same rule as in predictions; what has none stands alone. */
function pairsOf(mine: readonly PredictedPass[], old: readonly PredictedPass[], withinMs: number): [PredictedPass | null, PredictedPass | null][] {
  const former = matchPasses(mine, old, withinMs)
  return [
    ...mine.map((pass, i): [PredictedPass, PredictedPass | null] => [pass, former[i] ?? null]),
    ...old.filter(pass => !former.includes(pass)).map((pass): [null, PredictedPass] => [null, pass]),
  ]
}

function shiftsOfLinks(now: PredictedPass, before: PredictedPass, site: Site, mine: Ephemeris, old: Ephemeris, { links, ut1MinusUtcS }: CompareInput): ComparedPass['links'] {
  // Moved by more than its own length a pass has no span in common with its former self; then its own counts.
  const meets = Math.max(now.aosMs, before.aosMs) < Math.min(now.losMs, before.losMs)
  const fromMs = Math.max(meets ? Math.max(now.aosMs, before.aosMs) : now.aosMs, mine.fromMs, old.fromMs)
  const toMs = Math.min(meets ? Math.min(now.losMs, before.losMs) : now.losMs, mine.toMs, old.toMs)
  if (!(toMs >= fromMs)) return []
  const steps = Math.max(1, Math.min(MOST_STEPS, Math.ceil((toMs - fromMs) / STEP_MS)))
  const worst = new Map<Direction, number>()
  for (const direction of new Set(links.map(link => link.direction))) {
    const share = (ephemeris: Ephemeris, utcMs: UtcMs) => neededOverCarrierMinusOne({ stateAt: ephemeris.stateAt, site, ut1MinusUtcS }, direction, utcMs)
    let largest = 0
    for (let i = 0; i <= steps; i++) {
      const utcMs = fromMs + (toMs - fromMs) * i / steps
      largest = Math.max(largest, Math.abs(share(mine, utcMs) - share(old, utcMs)))
    }
    worst.set(direction, largest)
  }
  return links.map(({ id, direction, carrierHz }) => ({ id, worstShiftHz: carrierHz * worst.get(direction)! }))
}
