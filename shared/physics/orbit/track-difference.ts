import type { StateTeme } from '../types'
import { dot, norm, type Triple } from './vector'

/** Where one state lies against another on its orbit, metres. */
export interface TrackDifference {
  /** Higher. */
  readonly radialM: number
  /** Ahead, along the orbit. */
  readonly alongM: number
  /** To the left of the track: towards r × v. */
  readonly crossM: number
}

const cross = (a: Triple, b: Triple): Triple => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]

/**
 * Where `other` lies in the moving frame of `reference`: radial, along its orbit, and across it. Along the orbit it is the
 * angle in the plane times the radius, and radial the difference of heights, so that a spacecraft far ahead on the same
 * circle is ahead of it and not below.
 *
 * @card Radial, along, cross: where one set has the spacecraft against another.
 * @formula radial |r′| − |r|; along |r|·∠(r, r′) in the plane of r and v; cross r′·(r × v)/|r × v|
 * @source mechanics
 * @units m, m/s → m
 * @frame of the reference: radial, along its velocity, along r × v
 * @range any two states; along up to half a turn either way
 * @tolerance 1e-3 m of a·ΔM, r·Δi·sin u and −3π·Δa a revolution by hand (orbit/track-difference.test.ts)
 */
export function trackDifference(reference: StateTeme, other: StateTeme): TrackDifference {
  const [r, v, s] = [reference.positionM as Triple, reference.velocityMps as Triple, other.positionM as Triple]
  const radius = norm(r)
  const normal = cross(r, v)
  const forward = cross(normal, r)
  return {
    radialM: norm(s) - radius,
    alongM: radius * Math.atan2(dot(s, forward) / norm(forward), dot(s, r) / radius),
    crossM: dot(s, normal) / norm(normal),
  }
}

/**
 * Angle between the planes of two orbits, rad.
 *
 * @card Planes apart: how far the plane of one orbit is turned against another's.
 * @formula ∠(r × v, r′ × v′)
 * @source mechanics
 * @units m, m/s → rad
 * @frame none
 * @range any two orbits
 * @tolerance 1e-9 rad of a stated inclination (orbit/track-difference.test.ts)
 */
export function planeAngleRad(a: StateTeme, b: StateTeme): number {
  const [m, n] = [cross(a.positionM as Triple, a.velocityMps as Triple), cross(b.positionM as Triple, b.velocityMps as Triple)]
  return Math.atan2(norm(cross(m, n)), dot(m, n))
}
