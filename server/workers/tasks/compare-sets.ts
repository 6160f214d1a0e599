import type { AlongTrackModel } from '#shared/physics/accuracy/prior'
import { perigeeHeightKm } from '#shared/physics/accuracy/prior'
import { createEphemeris } from '#shared/physics/orbit/ephemeris'
import { findPasses } from '#shared/physics/orbit/passes'
import { createPropagator } from '#shared/physics/orbit/propagator'
import type { Ephemeris, MeanElements, PredictedPass, Propagator, Site, Span, UtcMs } from '#shared/physics/types'
import { identityToleranceMs, matchPasses } from '~~/server/domain/prediction/match-passes'
import type { ComparedLink, CurveSample } from './link-shift'
import { commonSpan, curvesOf, shiftsOfLinks } from './link-shift'
import type { DifferenceSample } from './set-difference'
import { setDifference } from './set-difference'
import type { SetWarning } from './set-warnings'
import { alongTrackJump, unusable, warningsAgainst, warningsOfSet } from './set-warnings'

export interface CompareInput {
  readonly candidate: { readonly elements: MeanElements, readonly accuracy: AlongTrackModel | null }
  readonly inUse: { readonly elements: MeanElements, readonly accuracy: AlongTrackModel } | null
  readonly stations: readonly { readonly id: string, readonly site: Site }[]
  readonly links: readonly ComparedLink[]
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

/** The pass and link that move most against what the link bears, with both curves. */
export interface ComparedCurve { readonly stationId: string, readonly aosMs: UtcMs, readonly linkId: string, readonly samples: readonly CurveSample[] }

export interface Comparison {
  readonly warnings: readonly SetWarning[]
  readonly passes: readonly ComparedPass[]
  readonly difference: readonly DifferenceSample[]
  readonly curve: ComparedCurve | null
  /** The jump along the track at the newer epoch, in sigmas of what the sets' age explains; null without a set in use. */
  readonly jumpSigmas: number | null
}

/** A compared pass with what its curves are drawn from. */
interface Case { readonly pass: ComparedPass, readonly site: Site, readonly span: Span | null }

/** Shift of prediction of the coming passes when `candidate` takes the place of the set in use, and what speaks against it. */
export function compareSets(input: CompareInput): Comparison {
  const made = createPropagator(input.candidate.elements)
  if (!made.ok) return { warnings: [unusable], passes: [], difference: [], curve: null, jumpSigmas: null }
  const candidate = made.propagator
  const former = input.inUse && createPropagator(input.inUse.elements)
  const inUse = former?.ok ? former.propagator : null
  const pair = inUse && input.inUse && input.candidate.accuracy ? { candidate, inUse, candidateAccuracy: input.candidate.accuracy, inUseAccuracy: input.inUse.accuracy } : null
  const warnings = [
    ...pair ? warningsAgainst(pair) : [],
    ...warningsOfSet(candidate.elements, perigeeHeightKm(candidate.elements), createEphemeris(candidate, input.fromMs, input.horizonEndMs)),
  ]
  // A period more on either side: a pass at the window's edge is then seen whole and finds its counterpart.
  const padMs = 86_400_000 / candidate.elements.meanMotionRevPerDay
  const over = (propagator: Propagator) => createEphemeris(propagator, input.fromMs - padMs, input.toMs + padMs)
  const [mine, old] = [over(candidate), inUse && over(inUse)]
  const cases = input.stations.flatMap(station => compareAt(station, mine, old, input, padMs))
  return {
    warnings,
    passes: cases.map(({ pass }) => pass).sort((a, b) => a.aosMs - b.aosMs),
    difference: old ? setDifference(mine, old, input.fromMs) : [],
    curve: old ? worstCurve(cases, mine, old, input) : null,
    jumpSigmas: pair ? alongTrackJump(pair)?.sigmas ?? null : null,
  }
}

function compareAt({ id, site }: CompareInput['stations'][number], mine: Ephemeris, old: Ephemeris | null, input: CompareInput, padMs: number): Case[] {
  const { fromMs, toMs, ut1MinusUtcS, links } = input
  const passesOf = (ephemeris: Ephemeris | null) => ephemeris ? findPasses({ ephemeris, site, fromMs: fromMs - padMs, toMs: toMs + padMs, ut1MinusUtcS }).passes : []
  const isComing = (pass: PredictedPass) => pass.losMs > fromMs && pass.aosMs < toMs
  const nothing = { stationId: id, aosShiftS: null, culminationShiftS: null, losShiftS: null, maxElevationShiftDeg: null, links: [] }
  return pairsOf(passesOf(mine), passesOf(old), identityToleranceMs(input.candidate.elements.meanMotionRevPerDay)).flatMap(([now, before]): Case[] => {
    if (now && before) {
      if (!isComing(now) && !isComing(before)) return []
      const aos = now.aosClipped || before.aosClipped ? null : (now.aosMs - before.aosMs) / 1000
      const los = now.losClipped || before.losClipped ? null : (now.losMs - before.losMs) / 1000
      const whole = aos !== null && los !== null
      const span = commonSpan(now, before, mine, old!)
      return [{ site, span, pass: {
        stationId: id, aosMs: now.aosMs, presence: 'both', aosShiftS: aos, losShiftS: los,
        culminationShiftS: whole ? (now.culminationMs - before.culminationMs) / 1000 : null,
        maxElevationShiftDeg: whole ? (now.maxElevationRad - before.maxElevationRad) * 180 / Math.PI : null,
        links: span ? shiftsOfLinks(span, site, mine, old!, links, ut1MinusUtcS) : [],
      } }]
    }
    const [only, presence] = now ? [now, 'new' as const] : [before!, 'gone' as const]
    return isComing(only) ? [{ site, span: null, pass: { ...nothing, aosMs: only.aosMs, presence } }] : []
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

function worstCurve(cases: readonly Case[], mine: Ephemeris, old: Ephemeris, { links, ut1MinusUtcS }: CompareInput): ComparedCurve | null {
  const [worst] = cases.flatMap(({ pass, site, span }) => pass.links.map(({ id, worstShiftHz }) => {
    const link = links.find(candidate => candidate.id === id)!
    return { pass, site, span, link, share: worstShiftHz / link.allowanceHz }
  })).sort((a, b) => b.share - a.share)
  if (!worst?.span) return null
  const { pass, site, span, link } = worst
  return { stationId: pass.stationId, aosMs: pass.aosMs, linkId: link.id, samples: curvesOf(span, site, mine, old, link, ut1MinusUtcS) }
}
