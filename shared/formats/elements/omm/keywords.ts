/** Where a keyword stands in a message, in the order of the standard. */
export type OmmPart = 'header' | 'metadata' | 'meanElements' | 'spacecraftParameters' | 'tleParameters' | 'covarianceMatrix'

export interface OmmKeyword {
  readonly key: string
  readonly part: OmmPart
  /** Units that may stand beside the value, as the standard writes them; none for a text or a pure number. */
  readonly units: readonly string[]
}

const keyword = (part: OmmPart) => (key: string, ...units: string[]): OmmKeyword => ({ key, part, units })
const header = keyword('header')
const metadata = keyword('metadata')
const mean = keyword('meanElements')
const craft = keyword('spacecraftParameters')
const tle = keyword('tleParameters')
const covariance = keyword('covarianceMatrix')

const AXES = ['X', 'Y', 'Z', 'X_DOT', 'Y_DOT', 'Z_DOT']

/**
 * The keywords of an Orbit Mean-Elements Message, for every notation. Source: CCSDS 502.0-B-3, tables 4-1 to 4-3 (from
 * memory).
 */
export const OMM_KEYWORDS: readonly OmmKeyword[] = [
  header('CCSDS_OMM_VERS'), header('CLASSIFICATION'), header('CREATION_DATE'), header('ORIGINATOR'), header('MESSAGE_ID'),
  metadata('OBJECT_NAME'), metadata('OBJECT_ID'), metadata('CENTER_NAME'), metadata('REF_FRAME'), metadata('REF_FRAME_EPOCH'), metadata('TIME_SYSTEM'), metadata('MEAN_ELEMENT_THEORY'),
  mean('EPOCH'), mean('SEMI_MAJOR_AXIS', 'km'), mean('MEAN_MOTION', 'rev/day'), mean('ECCENTRICITY'), mean('INCLINATION', 'deg'), mean('RA_OF_ASC_NODE', 'deg'),
  mean('ARG_OF_PERICENTER', 'deg'), mean('MEAN_ANOMALY', 'deg'), mean('GM', 'km**3/s**2'),
  craft('MASS', 'kg'), craft('SOLAR_RAD_AREA', 'm**2'), craft('SOLAR_RAD_COEFF'), craft('DRAG_AREA', 'm**2'), craft('DRAG_COEFF'),
  tle('EPHEMERIS_TYPE'), tle('CLASSIFICATION_TYPE'), tle('NORAD_CAT_ID'), tle('ELEMENT_SET_NO'), tle('REV_AT_EPOCH'),
  tle('BSTAR', '1/ER'), tle('BTERM', 'm**2/kg'), tle('MEAN_MOTION_DOT', 'rev/day**2'), tle('MEAN_MOTION_DDOT', 'rev/day**3'), tle('AGOM', 'm**2/kg'),
  covariance('COV_REF_FRAME'),
  ...AXES.flatMap((row, i) => AXES.slice(0, i + 1).map(column => covariance(`C${row}_${column}`))),
]

const byKey = new Map(OMM_KEYWORDS.map(known => [known.key, known]))

export const ommKeyword = (key: string): OmmKeyword | undefined => byKey.get(key)

/** A keyword as the standard spells it, found in small letters too; null for what is none. */
export function spellKeyword(written: string): string | null {
  if (byKey.has(written)) return written
  const capitals = written.toUpperCase()
  return byKey.has(capitals) ? capitals : null
}

const spellUnit = (unit: string) => unit.toLowerCase().replaceAll(' ', '').replaceAll('^', '**')

/** Whether a unit that stands beside a value is the one in which the standard has it. */
export const isUnitOf = (key: string, unit: string): boolean => byKey.get(key)?.units.some(known => spellUnit(known) === spellUnit(unit)) ?? false
