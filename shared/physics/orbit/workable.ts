import type { Ephemeris, Look, PredictedPass, Site, Span, UtcMs } from '../types'
import { gridStepMs } from './ephemeris'
import { lookOfView } from './look'
import { horizonRad, sortedMask } from './mask'
import { evenTimes, signsOf, spansBetween, withExtremes } from './positive-spans'
import { findMaximum, findRoot } from './refine'
import { createSiteTrack, sinElevation, VIEW_LENGTH } from './site-track'

const FEWEST_SAMPLES = 64
const WIDEST_TURN_RAD = 0.1
const SHORTEST_STEP_MS = 20
const MASK_POINT_TOLERANCE_MS = 0.1
/** A mask has its kinks at its points: looked at from either side, where an edge is steep, since on it a tenth of a millisecond may be a degree. */
const BESIDE_MASK_POINT_MS = 2 * MASK_POINT_TOLERANCE_MS
/** A sample this close to either end of an arc shows which way the azimuth runs there. */
const END_STEP_MS = 100

const signedTurn = (angleRad: number): number => Math.atan2(Math.sin(angleRad), Math.cos(angleRad))

/** What a site sees by interpolation (`near`), and by true propagation for refinement (`exact`). */
export interface Sights {
  readonly near: (utcMs: UtcMs) => Look
  readonly exact: (utcMs: UtcMs) => Look
  /** Sine of the elevation: as good as the elevation for signs and extremes, and cheaper. */
  readonly nearSin: (utcMs: UtcMs) => number
  readonly exactSin: (utcMs: UtcMs) => number
}

export function sightsFrom(ephemeris: Ephemeris, site: Site, ut1MinusUtcS: number): Sights {
  const track = createSiteTrack(ephemeris, site, ut1MinusUtcS)
  const view = new Float64Array(VIEW_LENGTH)
  const nearView = (utcMs: UtcMs): Float64Array => {
    if (!track.viewAt(utcMs, view)) throw new RangeError(`No state at ${utcMs}: the ephemeris runs from ${ephemeris.fromMs} to ${ephemeris.toMs}`)
    return view
  }
  const exactView = (utcMs: UtcMs): Float64Array => {
    if (!track.exactViewAt(utcMs, view)) throw new RangeError(`No state at ${utcMs}: the ephemeris runs from ${ephemeris.fromMs} to ${ephemeris.toMs}`)
    return view
  }
  return {
    near: utcMs => lookOfView(track, nearView(utcMs)),
    exact: utcMs => lookOfView(track, exactView(utcMs)),
    nearSin: utcMs => sinElevation(nearView(utcMs)),
    exactSin: utcMs => sinElevation(exactView(utcMs)),
  }
}

/** Even samples of an arc and the instants at which the azimuth turns back: between two of them it runs one way. */
function timesOneWay(azimuth: (utcMs: UtcMs) => number, arc: Span, count: number): number[] {
  const times = evenTimes(arc.fromMs, arc.toMs, count)
  const endStepMs = Math.min(END_STEP_MS, (arc.toMs - arc.fromMs) / count / 2)
  times.splice(1, 0, arc.fromMs + endStepMs)
  times.splice(-1, 0, arc.toMs - endStepMs)
  const all = [times[0]!]
  let before = azimuth(times[0]!)
  let here = azimuth(times[1]!)
  for (let i = 1; i < times.length - 1; i++) {
    const after = azimuth(times[i + 1]!)
    const [turned, turning] = [signedTurn(here - before), signedTurn(after - here)]
    if (turned * turning < 0) {
      const middle = here
      all.push(findMaximum(t => Math.sign(turned) * signedTurn(azimuth(t) - middle), times[i - 1]!, times[i + 1]!, MASK_POINT_TOLERANCE_MS))
    }
    all.push(times[i]!)
    before = here
    here = after
  }
  all.push(times[times.length - 1]!)
  return all.sort((a, b) => a - b)
}

/** Samples of an arc, closer where the azimuth runs, with the instants at which it turns back and either side of those at which it passes a mask point. */
function timesAlongMask(sights: Sights, site: Site, arc: Span, longestStepMs: number): number[] {
  const count = Math.max(FEWEST_SAMPLES, Math.ceil((arc.toMs - arc.fromMs) / longestStepMs))
  const points = sortedMask(site.mask)
  if (points.length < 2) return evenTimes(arc.fromMs, arc.toMs, count)
  const azimuth = (utcMs: UtcMs): number => sights.near(utcMs).azimuthRad
  const coarse = timesOneWay(azimuth, arc, count)

  const times: number[] = [coarse[0]!]
  const walk = (fromMs: number, fromRad: number, toMs: number, toRad: number): void => {
    if (Math.abs(signedTurn(toRad - fromRad)) > WIDEST_TURN_RAD && toMs - fromMs > SHORTEST_STEP_MS) {
      const middleMs = (fromMs + toMs) / 2
      const middleRad = azimuth(middleMs)
      walk(fromMs, fromRad, middleMs, middleRad)
      walk(middleMs, middleRad, toMs, toRad)
      return
    }
    const turned = signedTurn(toRad - fromRad)
    for (const point of points) {
      const ahead = signedTurn(point.azimuthRad - fromRad)
      if (ahead * turned > 0 && Math.abs(ahead) < Math.abs(turned)) {
        const atMs = findRoot(t => signedTurn(azimuth(t) - point.azimuthRad), fromMs, toMs, MASK_POINT_TOLERANCE_MS)
        times.push(Math.max(fromMs, atMs - BESIDE_MASK_POINT_MS), Math.min(toMs, atMs + BESIDE_MASK_POINT_MS))
      }
    }
    times.push(toMs)
  }
  let fromRad = azimuth(coarse[0]!)
  for (let i = 1; i < coarse.length; i++) {
    const toRad = azimuth(coarse[i]!)
    walk(coarse[i - 1]!, fromRad, coarse[i]!, toRad)
    fromRad = toRad
  }
  return [...new Set(times)].sort((a, b) => a - b)
}

/** The parts of an arc in which the spacecraft is above the horizon of site (mask and minimum) and link. */
export function partsAboveHorizon(sights: Sights, site: Site, arc: Span, minElevationRad: number, longestStepMs: number): Span[] {
  const clearance = (look: Look): number => look.elevationRad - horizonRad(site, look.azimuthRad, minElevationRad)
  const near = (utcMs: UtcMs): number => clearance(sights.near(utcMs))
  return spansBetween(t => clearance(sights.exact(t)), signsOf(near, withExtremes(near, timesAlongMask(sights, site, arc, longestStepMs))))
}

/**
 * The workable parts of a pass for a link with its own minimum elevation (rad): within the station's, those above it.
 * Crossings by true propagation, below 1 ms.
 *
 * @card Workable parts: the spans of a pass in which a link has its own least elevation.
 * @formula elevation(t) ≥ larger of the link’s and the station’s least elevation and the mask
 * @source mechanics
 * @units UTC ms, rad → UTC ms
 * @frame station’s horizon of WGS-84
 * @range within the pass
 * @tolerance 2 ms (orbit/passes.test.ts)
 */
export function workablePartsForLink(
  pass: PredictedPass, ephemeris: Ephemeris, site: Site, linkMinElevationRad: number, ut1MinusUtcS: number,
): Span[] {
  if (linkMinElevationRad <= site.minElevationRad) return [...pass.workable]
  const sights = sightsFrom(ephemeris, site, ut1MinusUtcS)
  // The mask is cleared throughout the pass's parts: only the plain minimum is left to ask.
  const bare: Site = { ...site, mask: [] }
  const stepMs = gridStepMs(ephemeris.propagator.elements) / 2
  return pass.workable.flatMap(part => partsAboveHorizon(sights, bare, part, linkMinElevationRad, stepMs))
}
