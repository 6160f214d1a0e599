import type { MeanElements } from '../../physics/types'
import { SetRefusal } from './reading'

type RangedKey = 'meanMotionRevPerDay' | 'eccentricity' | 'inclinationDeg' | 'raanDeg' | 'argPericenterDeg' | 'meanAnomalyDeg'
export type RangedElements = Pick<MeanElements, RangedKey>

/** Above this the orbit would lie inside the Earth. */
export const MEAN_MOTION_MAX_REV_PER_DAY = 17.5

const turn = (value: number) => Math.abs(value) <= 360

const RULES: readonly { key: RangedKey, label: string, holds: (value: number) => boolean, rule: string }[] = [
  { key: 'meanMotionRevPerDay', label: 'Mean motion', holds: n => n > 0 && n <= MEAN_MOTION_MAX_REV_PER_DAY, rule: `must be above 0 and at most ${MEAN_MOTION_MAX_REV_PER_DAY} revolutions a day (faster lies inside the Earth)` },
  { key: 'eccentricity', label: 'Eccentricity', holds: e => e >= 0 && e < 1, rule: 'must be from 0 up to, but not including, 1' },
  { key: 'inclinationDeg', label: 'Inclination', holds: i => i >= 0 && i <= 180, rule: 'must be from 0 to 180 degrees' },
  { key: 'raanDeg', label: 'Right ascension of the ascending node', holds: turn, rule: 'must lie within one turn, −360 to 360 degrees' },
  { key: 'argPericenterDeg', label: 'Argument of pericentre', holds: turn, rule: 'must lie within one turn, −360 to 360 degrees' },
  { key: 'meanAnomalyDeg', label: 'Mean anomaly', holds: turn, rule: 'must lie within one turn, −360 to 360 degrees' },
]

/**
 * Refuses elements that no orbit round the Earth has.
 * @param lineOf line of the upload on which a value stands
 * @throws SetRefusal `out-of-range`
 */
export function checkRanges(elements: RangedElements, lineOf: (key: RangedKey) => number): void {
  for (const { key, label, holds, rule } of RULES) {
    const value = elements[key]
    if (!holds(value)) throw new SetRefusal(lineOf(key), 'out-of-range', `${label} is ${value}: it ${rule}. Ask for this set again from its source.`)
  }
}
