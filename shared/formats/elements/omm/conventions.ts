import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import { quote } from '../show-value'
import type { OmmFields } from './fields'

const XP = 'SGP4-XP elements, which the SGP4 propagator cannot honour. Ask the source for SGP4 elements.'

/**
 * Refuses what would be read as something else: another time system, frame, centre or theory than SGP4 has (CCSDS
 * 502.0-B-3, tables 4-2 and 4-3). Keywords that are absent, as in flat exports, mean UTC, TEME, EARTH and SGP4.
 * @throws SetRefusal
 */
export function checkConventions(fields: OmmFields, warn: Warn): void {
  const demand = (key: string, accepted: readonly string[], why: string) => {
    const value = fields.text(key)
    if (value === null || accepted.includes(value.toUpperCase())) return
    throw new SetRefusal(fields.lineOf(key), 'convention', `${key} is ${quote(value)}: ${why}`)
  }
  demand('CENTER_NAME', ['EARTH'], 'only orbits round EARTH can be predicted. Upload a set for an Earth orbit.')
  demand('TIME_SYSTEM', ['UTC'], 'an epoch in another time system than UTC would be seconds off, hundreds of kilometres along the orbit. Convert the epoch to UTC and state TIME_SYSTEM UTC.')
  demand('REF_FRAME', ['TEME'], 'mean elements of SGP4 are given in TEME. Ask the source for SGP4 elements in TEME.')

  const theory = fields.text('MEAN_ELEMENT_THEORY')?.toUpperCase().replaceAll(' ', '')
  if (theory === 'SGP4-XP' || theory === 'SGP4XP') throw new SetRefusal(fields.lineOf('MEAN_ELEMENT_THEORY'), 'theory', `MEAN_ELEMENT_THEORY is SGP4-XP: ${XP}`)
  demand('MEAN_ELEMENT_THEORY', ['SGP4', 'SGP/SGP4'], 'elements of another theory than SGP4 would be predicted wrongly. Ask the source for SGP4 elements.')

  const type = fields.whole('EPHEMERIS_TYPE', 3)
  if (type === 4) throw new SetRefusal(fields.lineOf('EPHEMERIS_TYPE'), 'theory', `EPHEMERIS_TYPE is 4: ${XP}`)
  if (type !== null && type !== 0 && type !== 2) throw new SetRefusal(fields.lineOf('EPHEMERIS_TYPE'), 'theory', `EPHEMERIS_TYPE is ${type}: another theory than SGP4 (0 or 2). Ask the source for SGP4 elements.`)
  for (const key of ['BTERM', 'AGOM']) {
    if (fields.text(key) !== null) throw new SetRefusal(fields.lineOf(key), 'theory', `${key} belongs to ${XP}`)
  }
  if (fields.text('SEMI_MAJOR_AXIS') !== null && fields.text('MEAN_MOTION') === null) {
    throw new SetRefusal(fields.lineOf('SEMI_MAJOR_AXIS'), 'theory', 'SEMI_MAJOR_AXIS stands in place of MEAN_MOTION: SGP4 needs its own mean motion, which cannot be had exactly from an axis. Ask the source for MEAN_MOTION.')
  }
  const version = fields.text('CCSDS_OMM_VERS')
  if (version !== null && version !== '2.0' && version !== '3.0') {
    warn(fields.lineOf('CCSDS_OMM_VERS'), 'version', `CCSDS_OMM_VERS is ${quote(version)}; it is read as 3.0. Check the numbers if the source is new to you.`)
  }
}
