import { describe, expect, it } from 'vitest'
import type { ReferencePass } from '../../support/reference-data'
import { referenceDoppler, referencePasses } from '../../support/reference-data'
import { bench } from './support'

// Source: Skyfield 1.45 with python-sgp4 2.15, UT1 = UTC, light time iterated, special relativity (data/README.md).
/** 2 ms, and half a millisecond by which an instant is rounded. */
const CROSSING_S = 0.0025
const ANGLE_DEG = 0.0005
const RANGE_M = 1
const RANGE_RATE_MPS = 0.01
const DOPPLER_HZ: Readonly<Record<number, number>> = { 437500000: 0.05, 2245000000: 0.2, 8200000000: 0.5 }
const RAD = Math.PI / 180

const reference = referencePasses()
const doppler = referenceDoppler()
const at = (startMs: number, seconds: number) => new Date(startMs + Math.round(seconds * 1000)).toISOString()

describe('bench passes against an independent program', () => {
  const cases = reference.satellites.flatMap(satellite => reference.stations.map(station => [satellite.id, station.id] as const))
  it.each(cases)('of %s over %s', async (satelliteId, stationId) => {
    const satellite = reference.satellites.find(({ id }) => id === satelliteId)!
    const station = reference.stations.find(({ id }) => id === stationId)!
    const startMs = Date.parse(satellite.windowStart)
    const { latitudeDeg, longitudeDeg, heightM } = station
    const ask = async (minElevationDeg: number) => bench({
      elements: { text: `${satellite.line1}\n${satellite.line2}` }, station: { latitudeDeg, longitudeDeg, heightM, minElevationDeg },
      from: at(startMs, 0), to: at(startMs, satellite.windowDays * 86_400), sampleIntervalS: 3600,
    })
    for (const minElevationDeg of [0, 5, 10]) {
      const expected = reference.passes.filter(pass => pass.satellite === satelliteId && pass.station === stationId && pass.minElevationDeg === minElevationDeg)
      const { passes } = await ask(minElevationDeg)
      expect(passes.map(pass => [pass.aosClipped ?? false, pass.losClipped ?? false])).toEqual(expected.map(pass => [pass.aosClipped, pass.losClipped]))
      passes.forEach((pass, i) => {
        const other = expected[i]!
        expectCrossing(pass.aos, startMs, other.aosS, other)
        expectCrossing(pass.los, startMs, other.losS, other)
        expect(Math.abs(pass.maxElevationDeg - other.maxElevationDeg)).toBeLessThan(ANGLE_DEG)
        expect([pass.samples[0]!.at, pass.samples.at(-1)!.at]).toEqual([pass.aos, pass.los])
        expect(pass.samples.map(sample => sample.at)).toContain(pass.culmination)
      })
    }
  })

  /** A grazing pass crosses so slowly that its milliseconds mean nothing: what elevation it gains in them counts. */
  function expectCrossing(own: string, startMs: number, referenceS: number, pass: ReferencePass) {
    const apartS = Math.abs((Date.parse(own) - startMs) / 1000 - referenceS)
    const slope = 4 * (pass.maxElevationDeg - pass.minElevationDeg) / (pass.losS - pass.aosS)
    expect(Math.min(apartS / CROSSING_S, apartS * slope / ANGLE_DEG), `${apartS} s apart at ${referenceS} s`).toBeLessThanOrEqual(1)
  }
})

describe('bench samples against an independent program', () => {
  const sampled = reference.passes.filter(pass => pass.samples && pass.samples.azimuthDeg.length > 2)
  it.each(reference.satellites.map(satellite => satellite.id))('of %s: azimuth, elevation, range, range rate', async (satelliteId) => {
    const satellite = reference.satellites.find(({ id }) => id === satelliteId)!
    const startMs = Date.parse(satellite.windowStart)
    let compared = 0
    for (const pass of sampled.filter(({ satellite: id }) => id === satelliteId)) {
      const { latitudeDeg, longitudeDeg, heightM } = reference.stations.find(({ id }) => id === pass.station)!
      const { startS, stepS, azimuthDeg, elevationDeg, rangeM, rangeRateMps } = pass.samples!
      // From the second sample on the spacecraft is up: the pass is cut at `from`, and the grids fall together.
      const from = at(startMs, startS + stepS)
      const answer = await bench({
        elements: { text: `${satellite.line1}\n${satellite.line2}` }, station: { latitudeDeg, longitudeDeg, heightM, minElevationDeg: 0 },
        from, to: at(startMs, startS + (azimuthDeg.length - 2) * stepS), sampleIntervalS: stepS,
      })
      expect(answer.passes[0]).toMatchObject({ aos: from, aosClipped: true })
      const own = new Map(answer.passes[0]!.samples.map(sample => [sample.at, sample]))
      for (let k = 1; k < azimuthDeg.length - 1; k++) {
        const sample = own.get(at(startMs, startS + k * stepS))!
        const turn = Math.abs(sample.azimuthDeg - azimuthDeg[k]!)
        expect(Math.min(turn, 360 - turn) * Math.cos(sample.elevationDeg * RAD)).toBeLessThan(ANGLE_DEG)
        expect(Math.abs(sample.elevationDeg - elevationDeg[k]!)).toBeLessThan(ANGLE_DEG)
        expect(Math.abs(sample.rangeM - rangeM[k]!)).toBeLessThan(RANGE_M)
        expect(Math.abs(sample.rangeRateMps - rangeRateMps[k]!)).toBeLessThan(RANGE_RATE_MPS)
        compared++
      }
    }
    expect(compared).toBeGreaterThan(0)
  })

  it.each(doppler.passes.map(pass => [pass.satellite, pass] as const))('of %s: Doppler both ways on every carrier', async (_, pass) => {
    const startMs = Date.parse(pass.windowStart)
    const { latitudeDeg, longitudeDeg, heightM } = pass.station
    const count = pass.lightTimeDownS.length
    for (const carrierHz of doppler.carriersHz) {
      for (const [direction, columns] of [['downlink', pass.receivedMinusCarrierHz], ['uplink', pass.transmitMinusCarrierHz]] as const) {
        const published = Object.entries(columns).find(([key]) => Number(key) === carrierHz)![1]
        const { passes } = await bench({
          elements: { text: `${pass.line1}\n${pass.line2}` }, station: { latitudeDeg, longitudeDeg, heightM, minElevationDeg: -5 },
          from: at(startMs, pass.startS), to: at(startMs, pass.startS + (count - 1) * pass.stepS), sampleIntervalS: pass.stepS,
          link: { direction, carrierHz },
        })
        const own = new Map(passes.flatMap(({ samples }) => samples.map(sample => [sample.at, sample.dopplerHz])))
        published.forEach((hz, k) => {
          expect(Math.abs(own.get(at(startMs, pass.startS + k * pass.stepS))! - hz), `${direction} ${carrierHz} sample ${k}`).toBeLessThan(DOPPLER_HZ[carrierHz]!)
        })
      }
    }
  })
})
