import type { Ephemeris, Site, StateTeme, UtcMs } from '../types'
import { BEFORE, gridOf, NODES, WEIGHTS, type EphemerisGrid } from './ephemeris'
import { EARTH_ROTATION_RAD_PER_S, gmstRad, siteAxes, ut1Of, type SiteAxes } from './frames'

/** Where each number of a view stands: place relative to the site, m, and velocity against axes that do not rotate, m/s. */
export const EAST = 0
export const NORTH = 1
export const UP = 2
export const EAST_RATE = 3
export const NORTH_RATE = 4
export const UP_RATE = 5
export const VIEW_LENGTH = 6

/** A spacecraft as one site sees it, over the span of an ephemeris. */
export interface SiteTrack {
  readonly site: Site
  /** The site from the Earth's centre along its own east, north and up, m. */
  readonly siteEastM: number
  readonly siteNorthM: number
  readonly siteUpM: number
  /** The site's own velocity with the turning Earth, m/s; it is all to the east. */
  readonly siteSpeedMps: number
  /** The site's own axes against Earth-fixed ones: what along the Earth's axis. North and up share it, east has none. */
  readonly axisNorth: number
  readonly axisUp: number
  /** Writes the view at an instant: east, north, up, and their rates in axes that do not rotate. False outside the ephemeris. */
  viewAt(utcMs: UtcMs, view: Float64Array): boolean
  /** The same by true propagation, for refinement; where that fails, as `viewAt`. */
  exactViewAt(utcMs: UtcMs, view: Float64Array): boolean
}

interface TurnedGrid { readonly grid: EphemerisGrid, readonly states: Float64Array }
const turnedGrids = new WeakMap<Ephemeris, Map<number, TurnedGrid>>()

/** The nodes turned into Earth-fixed axes once for all sites; velocities turned alike, still against axes that do not rotate. */
function turnedGrid(ephemeris: Ephemeris, ut1MinusUtcS: number): TurnedGrid | null {
  const grid = gridOf(ephemeris)
  if (!grid) return null
  let byUt1 = turnedGrids.get(ephemeris)
  if (!byUt1) turnedGrids.set(ephemeris, byUt1 = new Map())
  const known = byUt1.get(ut1MinusUtcS)
  if (known) return known
  const states = new Float64Array(grid.states.length)
  for (let at = 0, node = grid.firstNode; at < states.length; at += 6, node++) {
    turn(grid.states, at, states, at, gmstRad(ut1Of(node * grid.stepMs, ut1MinusUtcS)))
  }
  const turned = { grid, states }
  byUt1.set(ut1MinusUtcS, turned)
  return turned
}

/** Two triples turned about z by an angle. */
function turn(from: ArrayLike<number>, fromAt: number, to: Float64Array, toAt: number, angleRad: number): void {
  const c = Math.cos(angleRad)
  const s = Math.sin(angleRad)
  for (let k = 0; k < 6; k += 3) {
    const x = from[fromAt + k]!
    const y = from[fromAt + k + 1]!
    to[toAt + k] = c * x + s * y
    to[toAt + k + 1] = c * y - s * x
    to[toAt + k + 2] = from[fromAt + k + 2]!
  }
}

/** Earth-fixed state to the site's view. */
function view(states: Float64Array, at: number, { positionM, east, north, up }: SiteAxes, to: Float64Array): void {
  const x = states[at]! - positionM[0]
  const y = states[at + 1]! - positionM[1]
  const z = states[at + 2]! - positionM[2]
  const vx = states[at + 3]!
  const vy = states[at + 4]!
  const vz = states[at + 5]!
  to[EAST] = east[0] * x + east[1] * y
  to[NORTH] = north[0] * x + north[1] * y + north[2] * z
  to[UP] = up[0] * x + up[1] * y + up[2] * z
  to[EAST_RATE] = east[0] * vx + east[1] * vy
  to[NORTH_RATE] = north[0] * vx + north[1] * vy + north[2] * vz
  to[UP_RATE] = up[0] * vx + up[1] * vy + up[2] * vz
}

/**
 * The track of a spacecraft over a site, by interpolation in Earth-fixed axes between the ephemeris's nodes: place and
 * velocity each by themselves, degree 9. The nodes are turned once for all sites, so that an instant costs neither sidereal
 * time nor a propagation, and nothing is allocated. The axes turn with the Earth, 16 times slower than a low orbit, so the
 * error stays that of the ephemeris: within 10 mm and 0.1 mm/s of SGP4. Where an interval of
 * the ephemeris is not smooth the view is SGP4's own.
 *
 * @card Track over a station: place and velocity in the station’s own axes, interpolated.
 * @formula x(t) = Σ w_j x_j/(t − t_j) / Σ w_j/(t − t_j), ten even nodes turned to the station
 * @source Berrut, Trefethen, SIAM Review 46 (2004) 501
 * @units UTC ms → m, m/s
 * @frame east, north, up of the station; velocity against axes that do not turn
 * @range within the ephemeris
 * @tolerance 0.01 m/s and 0.05 Hz at 437.5 MHz (predict/sample-pass.test.ts)
 */
export function createSiteTrack(ephemeris: Ephemeris, site: Site, ut1MinusUtcS: number): SiteTrack {
  const last = lastTracks.get(ephemeris)
  if (last && last.site === site && last.ut1MinusUtcS === ut1MinusUtcS) return last.track
  const track = makeTrack(ephemeris, site, ut1MinusUtcS)
  lastTracks.set(ephemeris, { site, ut1MinusUtcS, track })
  return track
}

/** The latest of each ephemeris: passes, curves and tables of one pair are asked one after the other. */
const lastTracks = new WeakMap<Ephemeris, { readonly site: Site, readonly ut1MinusUtcS: number, readonly track: SiteTrack }>()

function makeTrack(ephemeris: Ephemeris, site: Site, ut1MinusUtcS: number): SiteTrack {
  const axes = siteAxes(site)
  const { positionM, east, north, up } = axes
  const along = (axis: readonly [number, number, number]): number => axis[0] * positionM[0] + axis[1] * positionM[1] + axis[2] * positionM[2]
  const fixed = new Float64Array(6)
  const written = (state: StateTeme | null, utcMs: UtcMs, to: Float64Array): boolean => {
    if (!state) return false
    turn([...state.positionM, ...state.velocityMps], 0, fixed, 0, gmstRad(ut1Of(utcMs, ut1MinusUtcS)))
    view(fixed, 0, axes, to)
    return true
  }
  const turned = turnedGrid(ephemeris, ut1MinusUtcS)
  const { fromMs, toMs } = ephemeris
  const stepMs = turned?.grid.stepMs ?? 1000
  const firstNode = turned?.grid.firstNode ?? 0
  const states = turned?.states ?? new Float64Array(0)

  let lastLeft = NaN
  let lastIsGood = false
  const viewAt = (utcMs: UtcMs, to: Float64Array): boolean => {
    if (!(utcMs >= fromMs && utcMs <= toMs)) return false
    const left = Math.floor(utcMs / stepMs)
    const share = utcMs / stepMs - left
    // On a node the weights are infinite: the node itself is the answer, whatever its neighbourhood is like.
    if (share === 0 && turned !== null && left >= turned.grid.usableFrom && left <= turned.grid.usableTo) {
      view(states, 6 * (left - firstNode), axes, to)
      return true
    }
    if (left !== lastLeft) {
      lastLeft = left
      lastIsGood = turned !== null && turned.grid.isInterpolated(left)
    }
    if (!lastIsGood || share < 1e-12) return written(ephemeris.stateAt(utcMs), utcMs, to)
    interpolate(states, 6 * (left - BEFORE - firstNode), share, fixed)
    view(fixed, 0, axes, to)
    return true
  }

  return {
    site, viewAt,
    siteEastM: along(east), siteNorthM: along(north), siteUpM: along(up),
    siteSpeedMps: EARTH_ROTATION_RAD_PER_S * Math.hypot(positionM[0], positionM[1]),
    axisNorth: north[2], axisUp: up[2],
    exactViewAt: (utcMs, to) => {
      const state = ephemeris.propagator.at(utcMs)
      return state.ok ? written(state, utcMs, to) : viewAt(utcMs, to)
    },
  }
}

/**
 * Up over range of a view; rises and falls with the elevation, and costs no arc tangent.
 *
 * @card Sine of the elevation: what passes are searched by.
 * @formula up/√(east² + north² + up²)
 * @source mechanics
 * @units m → sine
 * @frame station’s east, north, up
 * @range range above 0
 * @tolerance 1e-9 of the sine of the look angle’s elevation (orbit/site-track.test.ts)
 */
export function sinElevation(view: Float64Array): number {
  const e = view[EAST]!
  const n = view[NORTH]!
  const u = view[UP]!
  return u / Math.sqrt(e * e + n * n + u * u)
}

/** `share` of the step between the fifth and the sixth of the ten states that start at `at`. */
function interpolate(states: Float64Array, at: number, share: number, to: Float64Array): void {
  let x = 0
  let y = 0
  let z = 0
  let vx = 0
  let vy = 0
  let vz = 0
  let total = 0
  for (let j = 0; j < NODES; j++, at += 6) {
    const weight = WEIGHTS[j]! / (BEFORE + share - j)
    total += weight
    x += weight * states[at]!
    y += weight * states[at + 1]!
    z += weight * states[at + 2]!
    vx += weight * states[at + 3]!
    vy += weight * states[at + 4]!
    vz += weight * states[at + 5]!
  }
  const scale = 1 / total
  to[0] = x * scale
  to[1] = y * scale
  to[2] = z * scale
  to[3] = vx * scale
  to[4] = vy * scale
  to[5] = vz * scale
}
