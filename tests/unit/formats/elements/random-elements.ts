import fc from 'fast-check'
import { cleanName } from '#shared/formats/elements/clean-name'
import type { MeanElements } from '#shared/physics/types'

const between = (min: number, max: number) => fc.double({ min, max, noNaN: true, noDefaultInfinity: true }).map(value => value + 0)
const counter = fc.option(fc.integer({ min: 0, max: 999_999_999 }))

/** Names as a reader would have cleaned them, awkward ones among them. */
const awkward = ['=1+1', '+A', '-A', '@A', '0 A', '1 A', '1 90001 1 2 3', '2 OF A KIND', '<omm>', '<?xml', '<!DOCTYPE omm>', '&amp;', ']]>', '{A}', '[A]', 'A, "B"; C', 'CCSDS_OMM_VERS = 3.0', 'EPOCH = 1', 'COMMENT a', 'A [deg]', '\'=A', '\'', '"', '\uFFFD', 'Ærø 衛星', 'NaN', 'null', '0']
const name = fc.oneof(fc.constantFrom(...awkward), fc.string({ unit: 'grapheme', maxLength: 40 }), fc.string({ unit: 'binary', maxLength: 20 }))
  .map(raw => cleanName(raw.replaceAll('\uFFFE', '').replaceAll('\uFFFF', ''), 1, () => {}))
  .filter(cleaned => cleaned === null || cleaned.toUpperCase() !== 'UNKNOWN')

const piece = fc.integer({ min: 1, max: 999 }).map(n => String(n).padStart(3, '0'))

/** Any elements that the reader takes. */
export const elements: fc.Arbitrary<MeanElements> = fc.record({
  name,
  catalogueNumber: fc.option(fc.integer({ min: 1, max: 999_999_999 }).map(String)),
  designator: fc.option(fc.tuple(fc.integer({ min: 1957, max: 2056 }), piece, fc.constantFrom('A', 'ZZ', 'BCD')).map(([year, launch, part]) => `${year}-${launch}${part}`)),
  epochUtcUs: fc.integer({ min: Date.UTC(1957, 0, 1) * 1000, max: Date.UTC(2200, 0, 1) * 1000 }),
  meanMotionRevPerDay: between(1e-6, 17.5),
  eccentricity: between(0, 1 - 1e-12),
  inclinationDeg: between(0, 180),
  raanDeg: between(-360, 360),
  argPericenterDeg: between(-360, 360),
  meanAnomalyDeg: between(-360, 360),
  bstar: fc.oneof(between(-1, 1), between(-1e-9, 1e-9), between(-1e5, 1e5)),
  meanMotionDot: between(-0.9, 0.9),
  meanMotionDdot: between(-0.01, 0.01),
  classification: fc.constantFrom('U', 'C', 'S'),
  elementSetNumber: counter,
  revolutionAtEpoch: counter,
})

/** Those that a TLE has columns for. */
export const tleElements: fc.Arbitrary<MeanElements> = fc.record({
  base: elements,
  catalogueNumber: fc.integer({ min: 0, max: 339_999 }).map(String),
  epochUtcUs: fc.integer({ min: Date.UTC(1957, 0, 1) * 1000, max: Date.UTC(2056, 11, 31, 23) * 1000 }),
  eccentricity: between(0, 0.9999999),
  meanMotionRevPerDay: between(0.0001, 17.5),
}).map(({ base, ...rest }) => ({ ...base, ...rest }))
