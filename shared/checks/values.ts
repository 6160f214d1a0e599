/**
 * Values from outside the project that the running code is held against: on the page of methods, and in tests. None was computed by
 * the product. "Worked out" means recomputed from the stated formula, apart from the product's code.
 */

export const places = ['range-rate', 'doppler', 'link', 'budget', 'plan', 'passes'] as const
export type Place = typeof places[number]

/** What the computation is asked at, the value from outside, and words for what it is asked at where a number says little. */
export type OutsideValue = readonly [at: number, expected: number, words?: string]

export interface OutsideValues {
  readonly id: string
  readonly place: Place
  /** The function of the core that is held; its card's anchor. */
  readonly card: string
  /** `{at}` stands for what it is asked at. */
  readonly what: string
  readonly unit: string
  /** Shown after the point. */
  readonly decimals: number
  /** In the unit, or as a share of the expected value where `isShare`. */
  readonly tolerance: number
  readonly isShare?: true
  readonly source: string
  readonly values: readonly OutsideValue[]
}

const SGP4 = 'Vallado, Crawford, Hujsak, Kelso, AIAA 2006-6753'
const SKYFIELD = 'Skyfield 1.45 with python-sgp4 2.15, cross-checked with ERFA'
const MECHANICS = 'mechanics, worked out'
const SINC = 'tables of sinc, worked out'

export const outsideValues = [
  { id: 'sgp4', place: 'range-rate', card: 'createPropagator', what: 'Object 00005 after 360 min, TEME {at}', unit: 'km', decimals: 8, tolerance: 2e-7, source: SGP4, values: [[0, -7154.03120202, 'x'], [1, -3783.17682504, 'y'], [2, -3536.19412294, 'z']] },
  { id: 'gmst', place: 'range-rate', card: 'gmstRad', what: 'Sidereal time at 1992-08-20 12:14 UT1', unit: '°', decimals: 8, tolerance: 6e-7, source: 'Vallado 2013, example 3-5', values: [[0, 152.578787810]] },
  { id: 'site', place: 'range-rate', card: 'sitePosition', what: 'Station at 45° N 0° E on the ellipsoid, {at}', unit: 'm', decimals: 4, tolerance: 1e-4, source: 'WGS-84, NIMA TR8350.2; at 45° from memory', values: [[0, 4_517_590.8788, 'from the axis'], [2, 4_487_348.4089, 'above the equator']] },
  { id: 'ut1', place: 'range-rate', card: 'siteStateTeme', what: 'A station on the equator moves by 0.1 s of UT1', unit: 'm', decimals: 2, tolerance: 0.05, source: 'handbook: 465.1 m/s at the equator', values: [[0.1, 46.51]] },
  { id: 'burn-orbit', place: 'range-rate', card: 'createPropagator', what: 'A burn of 1 cm/s along the track at 500 km: {at}', unit: '', decimals: 2, tolerance: 5e-3, isShare: true, source: `Δa = 2a·Δv/v and 3π·Δa an orbit, ${MECHANICS}`, values: [[0, 18.1, 'higher in the mean, m'], [1, 2.59, 'later after a day, km']] },
  { id: 'angles', place: 'range-rate', card: 'lookAt', what: 'Invented orbit, 500 km, over 42.8° S: {at}', unit: '°', decimals: 5, tolerance: 5e-4, source: SKYFIELD, values: [[0, 2.672331, 'azimuth'], [1, 7.719205, 'elevation']] },
  { id: 'range', place: 'range-rate', card: 'lookAt', what: 'The same instant: range', unit: 'm', decimals: 2, tolerance: 1, source: SKYFIELD, values: [[0, 1_891_020.76]] },
  { id: 'range-rate', place: 'range-rate', card: 'lookAt', what: 'The same instant: range rate', unit: 'm/s', decimals: 4, tolerance: 0.01, source: SKYFIELD, values: [[0, -6933.57484]] },
  { id: 'closed-form', place: 'range-rate', card: 'lookAt', what: 'Circular orbit, pass to {at}°: furthest from the closed form, of the largest shift', unit: '%', decimals: 3, tolerance: 0.5, source: 'Ali, Al-Dhahir, Hershey, IEEE Trans. Communications 46 (1998) 309, from memory', values: [[30, 0], [60, 0], [90, 0]] },

  { id: 'received-uhf', place: 'doppler', card: 'receivedOverTransmitted', what: 'Received minus carrier at 437.5 MHz, {at}', unit: 'Hz', decimals: 4, tolerance: 0.05, source: SKYFIELD, values: [[0, 10_413.6459, 'rising'], [330, 223.1188, 'culminating']] },
  { id: 'received-s', place: 'doppler', card: 'receivedOverTransmitted', what: 'Received minus carrier at 2245 MHz, {at}', unit: 'Hz', decimals: 4, tolerance: 0.2, source: SKYFIELD, values: [[0, 53_436.8799, 'rising'], [330, 1144.9181, 'culminating']] },
  { id: 'received-x', place: 'doppler', card: 'receivedOverTransmitted', what: 'Received minus carrier at 8200 MHz, {at}', unit: 'Hz', decimals: 4, tolerance: 0.5, source: SKYFIELD, values: [[0, 195_181.4766, 'rising'], [330, 4181.8833, 'culminating']] },
  { id: 'transmit-uhf', place: 'doppler', card: 'neededOverCarrierMinusOne', what: 'To transmit minus carrier at 437.5 MHz, {at}', unit: 'Hz', decimals: 4, tolerance: 0.05, source: SKYFIELD, values: [[0, -10_413.435, 'rising'], [330, -222.8716, 'culminating']] },
  { id: 'transmit-x', place: 'doppler', card: 'neededOverCarrierMinusOne', what: 'To transmit minus carrier at 8200 MHz, {at}', unit: 'Hz', decimals: 4, tolerance: 0.5, source: SKYFIELD, values: [[0, -195_177.5249, 'rising'], [330, -4177.2515, 'culminating']] },
  { id: 'uplink-7', place: 'doppler', card: 'createNeededFrequency', what: 'Uplink at 437 MHz, spacecraft {at} at 7 km/s', unit: 'Hz', decimals: 2, tolerance: 0.01, source: MECHANICS, values: [[7000, 10_203.84, 'receding'], [-7000, -10_203.61, 'approaching']] },
  { id: 'at-horizon', place: 'doppler', card: 'dopplerHz', what: 'Shift at 0°, 500 km, station in the orbit’s plane, {at} MHz', unit: 'Hz', decimals: 0, tolerance: 0.003, isShare: true, source: `f·v·R/((R + h)·c), ${MECHANICS}`, values: [[145, 3443], [437, 10_377], [2200, 52_243], [8200, 194_724]] },
  { id: 'peak-rate', place: 'doppler', card: 'createNeededFrequency', what: 'Peak rate at 500 km overhead, {at} MHz', unit: 'Hz/s', decimals: 1, tolerance: 0.003, isShare: true, source: `f·v²·R/((R + h)·h·c), ${MECHANICS}`, values: [[145, 52.9], [437, 159.3], [2200, 802], [8200, 2990]] },
  { id: 'second-order', place: 'doppler', card: 'receivedOverTransmitted', what: 'Nothing moves along the ray: time dilation at 8200 MHz', unit: 'Hz', decimals: 2, tolerance: 0.05, source: '−v²/2c², special relativity, worked out', values: [[0, -2.64]] },
  { id: 'turnaround', place: 'doppler', card: 'turnedAroundHz', what: 'Coherent transponder, 240/221 of 2106.40625 MHz', unit: 'MHz', decimals: 5, tolerance: 1e-8, source: 'CCSDS 401.0-B', values: [[0, 2287.5]] },
  { id: 'coherent-7', place: 'doppler', card: 'createNeededFrequency', what: 'Coherent, two ways, at 2287.5 MHz, spacecraft {at} at 7 km/s', unit: 'Hz', decimals: 0, tolerance: 1, source: `f·2β/(1 − β), ${MECHANICS}`, values: [[-7000, 106_826, 'approaching'], [7000, -106_821, 'receding']] },
  { id: 'symbol-clock', place: 'doppler', card: 'symbolClockPpmAt', what: 'Symbol clock at 0°, 500 km', unit: 'ppm', decimals: 2, tolerance: 0.1, source: 'first order, 10377 Hz of 437 MHz', values: [[0, 23.75]] },

  { id: 'quadrature-loss', place: 'link', card: 'lossDb', what: 'Quadrature, loss at ε = {at}', unit: 'dB', decimals: 3, tolerance: 5e-4, source: `${SINC}; at 0.5 Harris 1978, scalloping loss`, values: [[0.05, 0.036], [0.1, 0.143], [0.2, 0.579], [0.25, 0.912], [0.3, 1.326], [0.4, 2.420], [0.5, 3.922]] },
  { id: 'quadrature-epsilon', place: 'link', card: 'allowanceOf', what: 'Quadrature, ε at {at} dB', unit: '', decimals: 6, tolerance: 5e-7, source: SINC, values: [[0.1, 0.083564], [0.25, 0.131897], [0.5, 0.185991], [1, 0.261500], [2, 0.365466], [3, 0.442243]] },
  { id: 'coherent-epsilon', place: 'link', card: 'allowanceOf', what: 'Coherent, ε at {at} dB', unit: '', decimals: 7, tolerance: 5e-7, source: 'half of quadrature, common practice', values: [[0.1, 0.041782], [0.25, 0.0659485], [0.5, 0.0929955], [1, 0.130750], [2, 0.182733], [3, 0.2211215]] },
  { id: 'null', place: 'link', card: 'lossDb', what: 'What comes out, {at}', unit: 'of 1', decimals: 3, tolerance: 1e-12, source: 'first nulls, common practice', values: [[0, 0, 'quadrature at 1/T'], [1, 0, 'coherent at 1/(2T)'], [2, 0, 'coherent at 1/T']] },
  { id: 'half-power', place: 'link', card: 'lossDb', what: 'Quadrature, loss at {at}/T', unit: 'dB', decimals: 3, tolerance: 0.01, source: 'half-power offset, common practice', values: [[0.443, 3.0103]] },
  { id: 'roll-off', place: 'link', card: 'lossDb', what: 'Roll-off 0.35, loss at ε = {at}', unit: 'dB', decimals: 3, tolerance: 5e-4, source: 'overlap of root-raised cosines, from memory', values: [[0.1, 0.277]] },
  { id: 'interference', place: 'link', card: 'interSymbolInterferenceDb', what: 'Roll-off 0.35, interference at ε = {at}', unit: 'dB', decimals: 1, tolerance: 0.5, source: 'from memory', values: [[0.1, -27]] },
  { id: 'msk', place: 'link', card: 'lossDb', what: 'MSK, loss at ε = {at}', unit: 'dB', decimals: 3, tolerance: 5e-4, source: 'half-sine pulse, worked out', values: [[0.1, 0.225], [0.5, 6.021]] },
  { id: 'differential', place: 'link', card: 'lossDb', what: 'DBPSK at 1e-5, degradation at ε = {at}', unit: 'dB', decimals: 3, tolerance: 0.005, source: 'exact DBPSK error rate, worked out', values: [[0.02, 0.21], [0.05, 1.07], [0.1, 3.31]] },
  { id: 'fsk', place: 'link', card: 'lossDb', what: 'Non-coherent FSK at 1e-5, degradation at ε = {at}', unit: 'dB', decimals: 4, tolerance: 1e-4, source: 'exact error rate, worked out', values: [[0.05, 0.1589], [0.1, 0.5920], [0.2, 2.1715], [0.25, 3.4377]] },
  { id: 'multicarrier', place: 'link', card: 'lossDb', what: 'Multicarrier at Es/N0 20 dB, loss at ε = {at}', unit: 'dB', decimals: 3, tolerance: 5e-4, source: 'Pollet, Van Bladel, Moeneclaey 1995, in full; worked out', values: [[0.02, 0.542]] },
  { id: 'multicarrier-small', place: 'link', card: 'lossDb', what: 'Multicarrier at Es/N0 40 dB, loss at ε = {at}', unit: 'dB', decimals: 6, tolerance: 1e-3, isShare: true, source: 'Pollet, Van Bladel, Moeneclaey 1995: (10/(3 ln 10))·(πε)²·Es/N0, worked out', values: [[1e-4, 0.00142876]] },
  { id: 'loop', place: 'link', card: 'loopPhaseErrorRad', what: 'Loop, ζ 0.707, behind 159.3 Hz/s: phase error at B_L {at} Hz', unit: '°', decimals: 2, tolerance: 1e-3, isShare: true, source: 'loop theory, 2π·ḟ/ω_n², worked out', values: [[20, 40.3], [50, 6.45]] },
  { id: 'loop-drift', place: 'link', card: 'loopDriftLimitHzPerS', what: 'Loop, ζ 0.707, B_L 20 Hz: drift that it follows within {at}°', unit: 'Hz/s', decimals: 1, tolerance: 1e-3, isShare: true, source: 'the same, the other way round', values: [[40.3, 159.3]] },
  { id: 'filter', place: 'link', card: 'allowanceOf', what: 'Filter of 14 kHz, 9600 symbols/s, roll-off 0.25: what it leaves', unit: 'Hz', decimals: 1, tolerance: 1e-6, source: 'B/2 − (1 + α)·Rs/2, by hand', values: [[0, 1000]] },
  { id: 'bpsk', place: 'link', card: 'requiredEbN0Db', what: 'BPSK, Eb/N0 at an error rate of {at}', unit: 'dB', decimals: 3, tolerance: 0.005, source: 'handbook value', values: [[1e-5, 9.59, '1e-5'], [1e-3, 6.79, '1e-3']] },

  { id: 'budget', place: 'budget', card: 'budgetAt', what: 'Parts by hand: {at}', unit: 'Hz', decimals: 4, tolerance: 1e-3, source: 'by hand; L/√3 by JCGM 100:2008, 4.3.7', values: [[0, 3.75, 'timing, 25 ms · 150 Hz/s'], [1, 9, 'UT1, 0.9 s · 10 Hz/s'], [2, 16, 'orbit, 0.1 s · 160 Hz/s'], [3, 1154.7005, 'oscillators, 400 MHz · √(3² + 4²) ppm/√3']] },
  { id: 'sum', place: 'budget', card: 'uncertaintyHz', what: 'Limits 1 and 2 Hz, spreads 2, 3 and 6 Hz, k = {at}', unit: 'Hz', decimals: 3, tolerance: 1e-9, source: 'by hand', values: [[3, 24], [2, 17]] },
  { id: 'split', place: 'budget', card: 'partialUt1HzPerS', what: 'Equatorial orbit at 500 km: {at} over the Doppler rate', unit: '', decimals: 5, tolerance: 5e-4, source: 'n/(n − ω) and ω/(n − ω), mechanics, worked out', values: [[0, 1.07052, 'timing’s share'], [1, 0.07052, 'UT1’s share']] },
  { id: 'age', place: 'budget', card: 'alongTrackSigmaS', what: '0.5 km and 1.5 km/day at 7 km/s, two days old', unit: 's, 1 σ', decimals: 4, tolerance: 1e-9, source: 'by hand', values: [[2, 0.5]] },
  { id: 'burn', place: 'budget', card: 'manoeuvreSpreadM', what: 'A day after a burn of 1 cm/s along the track', unit: 'km', decimals: 3, tolerance: 1e-3, source: `3·Δv·t, ${MECHANICS}`, values: [[1, 2.592]] },
  { id: 'track', place: 'budget', card: 'trackDifference', what: 'Two circles at 500 km: {at}', unit: 'm', decimals: 1, tolerance: 0.1, source: 'a·ΔM and r·Δi·sin u, mechanics, worked out', values: [[0, 12_004.6, '0.1° of anomaly ahead, along'], [1, 6002.3, '0.1° of inclination at u = 30°, across']] },
  { id: 'height', place: 'budget', card: 'perigeeHeightKm', what: 'Height of a geostationary orbit', unit: 'km', decimals: 0, tolerance: 5, source: 'handbook value', values: [[1.00273791, 35_786]] },

  { id: 'rows', place: 'plan', card: 'planRetunes', what: 'Straight fall of {at} Hz/s for 60 s, allowance 1000 Hz: rows', unit: '', decimals: 0, tolerance: 0, source: '⌈swing/(2·0.8·allowance)⌉, by hand', values: [[100, 4], [50, 2], [20, 1]] },
  { id: 'corridor', place: 'plan', card: 'planRetunes', what: 'The same, {at} Hz/s: furthest from a setting, of the allowance', unit: '%', decimals: 2, tolerance: 0.1, source: 'swing shared among the rows: swing/(2·N·allowance), by hand', values: [[100, 75], [50, 75], [20, 60]] },
  { id: 'cadence', place: 'plan', card: 'cadencePath', what: 'A setting a second, 437 MHz, 500 km overhead: furthest off, {at}', unit: 'Hz', decimals: 1, tolerance: 0.5, source: `half and whole of 159.3 Hz/s for a second, ${MECHANICS}`, values: [[0, 79.65, 'as set'], [1, 159.3, 'were it set for its start']] },

  { id: 'pass', place: 'passes', card: 'findPasses', what: 'Invented orbit over 42.8° S above 5°, {at} on 2026-12-01', unit: 's of the day', decimals: 3, tolerance: 0.002, source: SKYFIELD, values: [[0, 858.516, 'AOS'], [1, 1417.945, 'LOS']] },
  { id: 'highest', place: 'passes', card: 'findPasses', what: 'The same pass: highest elevation', unit: '°', decimals: 5, tolerance: 5e-4, source: SKYFIELD, values: [[0, 60.745529]] },
] as const satisfies readonly OutsideValues[]
