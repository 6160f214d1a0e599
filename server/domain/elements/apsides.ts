import type { MeanElements } from '#shared/physics/types'

/** WGS-72 gravity, km³/s², as SGP4 has it; WGS-84 equatorial radius, km, over which heights are given. */
const EARTH_GM_KM3PS2 = 398_600.8
const EARTH_RADIUS_KM = 6378.137

/**
 * Heights of perigee and apogee over the equatorial radius, km: a(1 ∓ e) − R with a = (GM/n²)^⅓ (Kepler's third law) from
 * the set's mean motion; SGP4's own correction of it, a few kilometres, is left out.
 */
export function apsidesKm({ meanMotionRevPerDay, eccentricity }: Pick<MeanElements, 'meanMotionRevPerDay' | 'eccentricity'>): { perigeeKm: number, apogeeKm: number } {
  const radPerS = meanMotionRevPerDay * 2 * Math.PI / 86_400
  const semiMajorKm = Math.cbrt(EARTH_GM_KM3PS2 / radPerS ** 2)
  return { perigeeKm: semiMajorKm * (1 - eccentricity) - EARTH_RADIUS_KM, apogeeKm: semiMajorKm * (1 + eccentricity) - EARTH_RADIUS_KM }
}
