import type { Ephemeris, PredictedPass, PropagationError, Site, Span, UtcMs } from '../types'
import { gridStepMs } from './ephemeris'
import { evenTimes, highest, positiveSpans } from './positive-spans'
import { partsAboveHorizon, sightsFrom, type Sights } from './workable'

const FEWEST_STEPS = 16

export { workablePartsForLink } from './workable'

export interface PassQuery {
  readonly ephemeris: Ephemeris
  readonly site: Site
  readonly fromMs: UtcMs
  readonly toMs: UtcMs
  readonly ut1MinusUtcS: number
  /** Asked beside the site's own; the larger holds. */
  readonly minElevationRad?: number
}

export interface PassSearch {
  readonly kind: 'passes'
  /** In order of AOS; empty when the spacecraft never rises. */
  readonly passes: readonly PredictedPass[]
  /** Workable throughout: one pass, clipped at both ends. */
  readonly alwaysVisible: boolean
  /** The error that ends the set's validity inside the window. */
  readonly endedBy: PropagationError | null
  readonly validUntilMs: UtcMs
}

/** Sampling instants: the ephemeris's own nodes, where a state costs nothing, and the window's ends. */
function gridTimes(fromMs: UtcMs, toMs: UtcMs, stepMs: number): number[] {
  if (toMs - fromMs < FEWEST_STEPS * stepMs) return evenTimes(fromMs, toMs, FEWEST_STEPS)
  const times = [fromMs]
  for (let node = Math.floor(fromMs / stepMs) + 1; node * stepMs < toMs; node++) times.push(node * stepMs)
  times.push(toMs)
  return times
}

/** The pass on one arc above the plain minimum; null where the arc never clears the mask. */
function passOnArc(sights: Sights, query: PassQuery, window: Span, arc: Span, plainRad: number, stepMs: number): PredictedPass | null {
  const workable = query.site.mask.length === 0
    ? [arc]
    : partsAboveHorizon(sights, query.site, arc, plainRad, stepMs / 4)
  const first = workable[0]
  const last = workable[workable.length - 1]
  if (!first || !last) return null
  const [aosMs, losMs] = [first.fromMs, last.toMs]
  const times = evenTimes(aosMs, losMs, Math.max(FEWEST_STEPS, Math.ceil(2 * (losMs - aosMs) / stepMs)))
  const culminationMs = highest(sights.nearSin, times).ms
  return {
    aosMs,
    culminationMs,
    losMs,
    maxElevationRad: sights.exact(culminationMs).elevationRad,
    aosClipped: aosMs === window.fromMs,
    losClipped: losMs === window.toMs,
    workable,
  }
}

/**
 * All passes of a spacecraft over a site inside a window. A pass is one arc above the plain minimum elevation; AOS is
 * the start of its first workable part (above mask and minimum), LOS the end of its last; an arc that never clears the
 * mask is none. Culmination is the highest elevation between AOS and LOS, at an edge of the window where it is clipped.
 *
 * Elevation maxima are bracketed on the ephemeris's grid and refined, so that a pass which peaks 0.01° above is found;
 * crossings are refined by true propagation below 1 ms. Where the elements' validity ends inside the window the search
 * ends with it, and `endedBy` says why; a pass cut there is clipped.
 *
 * @card Passes: when a spacecraft is above a station’s horizon, with culmination and workable parts.
 * @formula elevation(t) − horizon(azimuth(t)) = 0: maxima bracketed on the grid, crossings refined on SGP4 itself
 * @source mechanics
 * @units UTC ms, rad → UTC ms, rad
 * @frame station’s horizon of WGS-84
 * @range all orbits that SGP4 knows; a set that ends in the window ends the search; no refraction
 * @tolerance 2 ms in AOS and LOS, 0.0005° of elevation where grazing (orbit/reference-passes.test.ts); none missed against sampling
 *   (orbit/brute-force.test.ts)
 */
export function findPasses(query: PassQuery): PassSearch {
  const { ephemeris, site } = query
  const fromMs = Math.max(query.fromMs, ephemeris.fromMs)
  const toMs = Math.min(query.toMs, ephemeris.toMs)
  const endedBy = ephemeris.endedBy !== null && toMs < query.toMs ? ephemeris.endedBy : null
  const nothing: PassSearch = { kind: 'passes', passes: [], alwaysVisible: false, endedBy, validUntilMs: Math.max(toMs, query.fromMs) }
  if (!(toMs > fromMs)) return nothing

  const sights = sightsFrom(ephemeris, site, query.ut1MinusUtcS)
  const plainRad = Math.max(site.minElevationRad, query.minElevationRad ?? -Infinity)
  const stepMs = gridStepMs(ephemeris.propagator.elements)
  const sinPlain = Math.sin(plainRad)
  const arcs = positiveSpans(
    t => sights.nearSin(t) - sinPlain,
    t => sights.exactSin(t) - sinPlain,
    gridTimes(fromMs, toMs, stepMs),
  )
  const window = { fromMs, toMs }
  const passes = arcs.flatMap(arc => passOnArc(sights, query, window, arc, plainRad, stepMs) ?? [])
  const [only, another] = passes
  const whole = only?.workable[0]
  const alwaysVisible = !another && only?.workable.length === 1 && whole?.fromMs === fromMs && whole.toMs === toMs
  return { ...nothing, passes, alwaysVisible, validUntilMs: toMs }
}
