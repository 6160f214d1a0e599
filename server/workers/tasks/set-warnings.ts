import type { AlongTrackModel } from '#shared/physics/accuracy/prior'
import { alongTrackSigmaS } from '#shared/physics/accuracy/prior'
import { planeAngleRad, trackDifference } from '#shared/physics/orbit/track-difference'
import type { Triple } from '#shared/physics/orbit/vector'
import { norm } from '#shared/physics/orbit/vector'
import type { Ephemeris, MeanElements, Propagator } from '#shared/physics/types'

/** What speaks against a set, with its figures, and what to do about it. */
export interface SetWarning { code: string, message: string, action: string }

/** A jump along the orbit beyond this many sigma of what the sets' age explains. */
const JUMP_SIGMAS = 3
/** Half a degree of plane change costs a low orbit 66 m/s: no small satellite does that between two sets. */
const OTHER_PLANE_DEG = 0.5
/** One per cent of mean motion is 46 km of height in a low orbit. */
const OTHER_MEAN_MOTION_SHARE = 0.01
/** Under this perigee drag is felt within days. */
const DRAG_PERIGEE_KM = 800

const hours = (us: number) => (us / 3.6e9).toFixed(1)

export const unusable: SetWarning = { code: 'unusable', message: 'SGP4 fails with this set at its own epoch.', action: 'It cannot be put into use: refuse it.' }

/** What speaks against a set by itself: drag of the wrong sign, decay within the horizon. */
export function warningsOfSet(elements: MeanElements, perigeeKm: number, overHorizon: Ephemeris): SetWarning[] {
  const warnings: SetWarning[] = []
  if (elements.bstar < 0) warnings.push({ code: 'bstar-negative', message: `B* is ${elements.bstar}: negative drag, which would raise the orbit. The fit behind this set was poor, or it spans a manoeuvre.`, action: 'Take another set of about this epoch where there is one; used, it runs wrong within days.' })
  else if (elements.bstar === 0 && perigeeKm < DRAG_PERIGEE_KM) warnings.push({ code: 'bstar-zero', message: `B* is 0 at a perigee of ${perigeeKm.toFixed(0)} km: drag is left out, and the prediction will run late within days.`, action: 'Use it for the next passes only, and replace it by a set with drag.' })
  if (overHorizon.endedBy) warnings.push({ code: 'decays', message: `By this set the orbit ends at ${new Date(overHorizon.toMs).toISOString()}, within the horizon. Nothing is predicted after that.`, action: 'Compare with other sets: either the spacecraft comes down, or this set is wrong.' })
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
export function warningsAgainst(pair: SetPair): SetWarning[] {
  const warnings: SetWarning[] = []
  const [mine, other] = [pair.candidate.elements, pair.inUse.elements]
  if (mine.epochUtcUs < other.epochUtcUs) warnings.push({ code: 'epoch-older', message: `Its epoch is ${hours(other.epochUtcUs - mine.epochUtcUs)} h older than that of the set in use.`, action: 'Keep the set in use unless you know that it is wrong; refuse this one.' })
  const states = statesAtNewer(pair)
  if (!states) return warnings

  const planeDeg = planeAngleRad(states.inUse, states.candidate) * 180 / Math.PI
  const ratio = mine.meanMotionRevPerDay / other.meanMotionRevPerDay - 1
  if (planeDeg > OTHER_PLANE_DEG || Math.abs(ratio) > OTHER_MEAN_MOTION_SHARE) {
    const what = [planeDeg > OTHER_PLANE_DEG ? `the orbit's plane is turned by ${planeDeg.toFixed(2)}°` : '', Math.abs(ratio) > OTHER_MEAN_MOTION_SHARE ? `the mean motion differs by ${(ratio * 100).toFixed(2)} %` : ''].filter(part => part !== '').join(' and ')
    warnings.push({ code: 'other-object', message: `Against the set in use ${what}: this looks like someone else's object.`, action: 'Check the catalogue number with whoever sent it; refuse it if it is not this spacecraft.' })
    return warnings
  }
  const jump = alongTrackJump(pair)!
  if (jump.sigmas > JUMP_SIGMAS) {
    warnings.push({
      code: 'along-track-jump',
      message: `At the newer epoch this set has the spacecraft ${(Math.abs(jump.alongM) / 1000).toFixed(1)} km (${(Math.abs(jump.alongM) / jump.speedMps).toFixed(2)} s) ${jump.alongM > 0 ? 'ahead of' : 'behind'} the set in use; the age of the sets explains ${(JUMP_SIGMAS * jump.sigmaM / 1000).toFixed(1)} km (${JUMP_SIGMAS} σ). A manoeuvre, or someone else's object?`,
      action: 'If the spacecraft has manoeuvred, enter the manoeuvre and use this set; if not, wait for the next set and compare again.',
    })
  }
  return warnings
}

/** How far the candidate is along the track of the set in use at the newer of both epochs, against what their ages explain; null where either has ended. */
export function alongTrackJump(pair: SetPair): { alongM: number, sigmaM: number, sigmas: number, speedMps: number } | null {
  const states = statesAtNewer(pair)
  if (!states) return null
  const { candidateAccuracy, inUseAccuracy } = pair
  const { alongM } = trackDifference(states.inUse, states.candidate)
  const sigmaM = Math.hypot(alongTrackSigmaS(candidateAccuracy)(states.atMs) * candidateAccuracy.speedMps, alongTrackSigmaS(inUseAccuracy)(states.atMs) * inUseAccuracy.speedMps)
  return { alongM, sigmaM, sigmas: Math.abs(alongM) / sigmaM, speedMps: norm(states.inUse.velocityMps as Triple) }
}

function statesAtNewer({ candidate, inUse }: SetPair) {
  const atMs = Math.max(candidate.elements.epochUtcUs, inUse.elements.epochUtcUs) / 1000
  const [a, b] = [candidate.at(atMs), inUse.at(atMs)]
  return a.ok && b.ok ? { atMs, candidate: a, inUse: b } : null
}
