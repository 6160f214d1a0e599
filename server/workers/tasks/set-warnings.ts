import type { AlongTrackModel } from '#shared/physics/accuracy/prior'
import { alongTrackSigmaS } from '#shared/physics/accuracy/prior'
import type { Triple } from '#shared/physics/orbit/vector'
import { dot, norm } from '#shared/physics/orbit/vector'
import type { Ephemeris, MeanElements, Propagator, StateTeme } from '#shared/physics/types'

export interface SetWarning { code: string, message: string }

/** A jump along the orbit beyond this many sigma of what the sets' age explains. */
const JUMP_SIGMAS = 3
/** Half a degree of plane change costs a low orbit 66 m/s: no small satellite does that between two sets. */
const OTHER_PLANE_DEG = 0.5
/** One per cent of mean motion is 46 km of height in a low orbit. */
const OTHER_MEAN_MOTION_SHARE = 0.01
/** Under this perigee drag is felt within days. */
const DRAG_PERIGEE_KM = 800

const cross = (a: Triple, b: Triple): Triple => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
const hours = (us: number) => (us / 3.6e9).toFixed(1)

/** What speaks against a set by itself: drag of the wrong sign, decay within the horizon. */
export function warningsOfSet(elements: MeanElements, perigeeKm: number, overHorizon: Ephemeris): SetWarning[] {
  const warnings: SetWarning[] = []
  if (elements.bstar < 0) warnings.push({ code: 'bstar-negative', message: `B* is ${elements.bstar}: negative drag, which would raise the orbit. The fit behind this set was poor, or it spans a manoeuvre.` })
  else if (elements.bstar === 0 && perigeeKm < DRAG_PERIGEE_KM) warnings.push({ code: 'bstar-zero', message: `B* is 0 at a perigee of ${perigeeKm.toFixed(0)} km: drag is left out, and the prediction will run late within days.` })
  if (overHorizon.endedBy) warnings.push({ code: 'decays', message: `By this set the orbit ends at ${new Date(overHorizon.toMs).toISOString()}, within the horizon. Nothing is predicted after that.` })
  return warnings
}

export interface SetPair {
  readonly candidate: Propagator
  readonly inUse: Propagator
  readonly candidateAccuracy: AlongTrackModel
  readonly inUseAccuracy: AlongTrackModel
}

/**
 * What speaks against putting a set in the place of the one in use: an older epoch; another plane or mean motion, as
 * of another object; a jump along the orbit that the sets' age does not explain. Both are propagated to the newer of
 * the two epochs, so that what both know of (drag, the drift of the node) counts for neither.
 */
export function warningsAgainst({ candidate, inUse, candidateAccuracy, inUseAccuracy }: SetPair): SetWarning[] {
  const warnings: SetWarning[] = []
  const [mine, other] = [candidate.elements, inUse.elements]
  if (mine.epochUtcUs < other.epochUtcUs) warnings.push({ code: 'epoch-older', message: `Its epoch is ${hours(other.epochUtcUs - mine.epochUtcUs)} h older than that of the set in use.` })
  const atMs = Math.max(mine.epochUtcUs, other.epochUtcUs) / 1000
  const [a, b] = [candidate.at(atMs), inUse.at(atMs)]
  if (!a.ok || !b.ok) return warnings

  const planeDeg = angleDeg(normal(a), normal(b))
  const ratio = mine.meanMotionRevPerDay / other.meanMotionRevPerDay - 1
  if (planeDeg > OTHER_PLANE_DEG || Math.abs(ratio) > OTHER_MEAN_MOTION_SHARE) {
    const what = [planeDeg > OTHER_PLANE_DEG ? `the orbit's plane is turned by ${planeDeg.toFixed(2)}°` : '', Math.abs(ratio) > OTHER_MEAN_MOTION_SHARE ? `the mean motion differs by ${(ratio * 100).toFixed(2)} %` : ''].filter(part => part !== '').join(' and ')
    warnings.push({ code: 'other-object', message: `Against the set in use ${what}: this looks like someone else's object. Check the catalogue number.` })
    return warnings
  }
  const aheadM = alongTrackM(a, b)
  const speed = norm(b.velocityMps as Triple)
  const sigmaM = Math.hypot(alongTrackSigmaS(candidateAccuracy)(atMs) * candidateAccuracy.speedMps, alongTrackSigmaS(inUseAccuracy)(atMs) * inUseAccuracy.speedMps)
  if (Math.abs(aheadM) > JUMP_SIGMAS * sigmaM) {
    warnings.push({ code: 'along-track-jump', message: `At the newer epoch this set has the spacecraft ${(Math.abs(aheadM) / 1000).toFixed(1)} km (${(Math.abs(aheadM) / speed).toFixed(2)} s) ${aheadM > 0 ? 'ahead of' : 'behind'} the set in use; the age of the sets explains ${(JUMP_SIGMAS * sigmaM / 1000).toFixed(1)} km. A manoeuvre, or someone else's object?` })
  }
  return warnings
}

const normal = (state: StateTeme): Triple => cross(state.positionM as Triple, state.velocityMps as Triple)
const angleDeg = (a: Triple, b: Triple): number => Math.atan2(norm(cross(a, b)), dot(a, b)) * 180 / Math.PI

/** How far `a` is ahead of `b` along the orbit of `b`, m: the angle in its plane times its radius. */
function alongTrackM(a: StateTeme, b: StateTeme): number {
  const position = b.positionM as Triple
  const radius = norm(position)
  const forward = cross(normal(b), position)
  return radius * Math.atan2(dot(a.positionM as Triple, forward) / norm(forward), dot(a.positionM as Triple, position) / radius)
}
