import { describe, expect, it } from 'vitest'
import { createNeededFrequency, statesOf } from '../../../shared/physics/doppler/needed'
import { receivedOverTransmitted } from '../../../shared/physics/doppler/ratio'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { propagatorOf, referenceDoppler } from '../../support/reference-data'
import { elementsFromLines, siteFromDegrees } from '../../support/reference-elements'

// Source: Skyfield 1.45 with python-sgp4 2.15, light time iterated, special relativity (data/README.md).
const TOLERANCE_HZ: Readonly<Record<string, number>> = { 437500000: 0.05, 2245000000: 0.2, 8200000000: 0.5 }
const LIGHT_TIME_TOLERANCE_S = 2e-9

const reference = referenceDoppler()

describe('Doppler against an independent program', () => {
  it.each(reference.passes.map(pass => [pass.satellite, pass] as const))('agrees for %s both ways on every carrier', (_, pass) => {
    const propagator = propagatorOf(elementsFromLines(pass.line1, pass.line2))
    const site = siteFromDegrees(pass.station)
    const startMs = Date.parse(pass.windowStart) + pass.startS * 1000
    const endMs = startMs + (pass.lightTimeDownS.length - 1) * pass.stepS * 1000
    const ephemeris = createEphemeris(propagator, startMs, endMs)

    for (const stateAt of [ephemeris.stateAt, statesOf(propagator)]) {
      const path = { stateAt, site, ut1MinusUtcS: 0 }
      for (const carrierHz of reference.carriersHz) {
        const columns = [
          ['downlink', Object.entries(pass.receivedMinusCarrierHz).find(([key]) => Number(key) === carrierHz)![1]],
          ['uplink', Object.entries(pass.transmitMinusCarrierHz).find(([key]) => Number(key) === carrierHz)![1]],
        ] as const
        for (const [direction, published] of columns) {
          const needed = createNeededFrequency({ ...path, direction, carrierHz })
          published.forEach((hz, k) => {
            const atMs = startMs + k * pass.stepS * 1000
            expect(Math.abs(needed.dopplerHz(atMs) - hz), `${direction} ${carrierHz} sample ${k}`).toBeLessThan(TOLERANCE_HZ[carrierHz]!)
            expect(needed.frequencyHz(atMs)).toBeCloseTo(carrierHz + needed.dopplerHz(atMs), 5)
          })
        }
      }
      pass.lightTimeDownS.forEach((seconds, k) => {
        const own = receivedOverTransmitted(path, 'downlink', startMs + k * pass.stepS * 1000).lightTimeS
        expect(Math.abs(own - seconds)).toBeLessThan(LIGHT_TIME_TOLERANCE_S)
      })
    }
  })
})
