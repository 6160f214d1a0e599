import type { MeanElements } from '../../../physics/types'
import type { Line } from '../lines'
import { checkRanges } from '../ranges'
import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import { quote } from '../show-value'
import { spellOutCatalogueNumber } from './alpha5'
import type { Columns } from './columns'
import { LINE_1, LINE_2, checkChecksum, checkLayout, columnsOf, named } from './columns'
import { fullYear, readTleEpoch } from './epoch'
import { readCounter, readFixed, readImplied, readPower } from './numbers'

function readCatalogueNumber(line: Line, where: Columns): string {
  const text = columnsOf(line, where)
  const number = spellOutCatalogueNumber(text)
  if (number !== null) return number
  throw new SetRefusal(line.number, 'catalogue-number', `${named(where)} reads ${quote(text)}: five digits, or a letter and four digits (Alpha-5, which leaves out I and O), belong there. Correct it or ask for this set again.`)
}

/** "26801A" is "2026-801A"; other text stays as it is. */
function readDesignator(line1: Line): string | null {
  const text = columnsOf(line1, LINE_1.designator).trim().toUpperCase()
  if (text === '') return null
  return /^\d{5}[A-Z]{1,3}$/.test(text) ? `${fullYear(Number(text.slice(0, 2)))}-${text.slice(2)}` : text
}

/** Theories other than SGP4 give wrong positions in this propagator. */
function checkEphemerisType(line1: Line): void {
  const type = columnsOf(line1, LINE_1.ephemerisType)
  if (type === ' ' || type === '0' || type === '2') return
  const why = type === '4' ? 'SGP4-XP elements, which the SGP4 propagator cannot honour' : 'another theory than SGP4'
  throw new SetRefusal(line1.number, 'theory', `${named(LINE_1.ephemerisType)} is ${quote(type)}: ${why}. Ask the source for SGP4 elements (type 0).`)
}

function warnLowerCase(line1: Line, warn: Warn): void {
  const letters = columnsOf(line1, { label: '', from: 3, to: 17 })
  if (letters === letters.toUpperCase()) return
  warn(line1.number, 'lower-case', 'Lower-case letters in columns 3–17 are read as capitals. Nothing needs to be done.')
}

/**
 * One set of the published two-line format. Layout, then each field, then the checksums, then the ranges, so that the
 * reason given is the most telling one.
 * @throws SetRefusal
 */
export function parseTleSet(name: string | null, line1: Line, line2: Line, warn: Warn): MeanElements {
  checkLayout(line1, 1, warn)
  checkLayout(line2, 2, warn)
  const catalogueNumber = readCatalogueNumber(line1, LINE_1.catalogueNumber)
  const second = readCatalogueNumber(line2, LINE_2.catalogueNumber)
  if (second !== catalogueNumber) {
    throw new SetRefusal(line2.number, 'number-mismatch', `Line 1 is of object ${catalogueNumber} and line 2 of object ${second}: both lines must bear one number. Put each line 2 after its own line 1.`)
  }
  checkEphemerisType(line1)
  const elements: MeanElements = {
    name,
    catalogueNumber,
    designator: readDesignator(line1),
    classification: columnsOf(line1, LINE_1.classification).trim().toUpperCase() || 'U',
    epochUtcUs: readTleEpoch(line1, warn),
    meanMotionDot: readFixed(line1, LINE_1.meanMotionDot),
    meanMotionDdot: readPower(line1, LINE_1.meanMotionDdot, warn),
    bstar: readPower(line1, LINE_1.bstar, warn),
    elementSetNumber: readCounter(line1, LINE_1.elementSetNumber),
    inclinationDeg: readFixed(line2, LINE_2.inclination),
    raanDeg: readFixed(line2, LINE_2.raan),
    eccentricity: readImplied(line2, LINE_2.eccentricity, warn),
    argPericenterDeg: readFixed(line2, LINE_2.argPericenter),
    meanAnomalyDeg: readFixed(line2, LINE_2.meanAnomaly),
    meanMotionRevPerDay: readFixed(line2, LINE_2.meanMotion),
    revolutionAtEpoch: readCounter(line2, LINE_2.revolution),
  }
  checkChecksum(line1, warn)
  checkChecksum(line2, warn)
  checkRanges(elements, () => line2.number)
  warnLowerCase(line1, warn)
  return elements
}
