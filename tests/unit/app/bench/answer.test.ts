import { describe, expect, it } from 'vitest'
import { benchStrips, budgetWords, clippedWords, linkWords, radioWords, underHeadings } from '~/utils/bench/answer'
import type { BenchPass } from '~/utils/bench/answer'
import { readingAt } from '~/utils/passes/strips'

const at = (seconds: number) => new Date(Date.parse('2026-12-01T03:00:00.000Z') + seconds * 1000).toISOString()
const sample = (seconds: number, dopplerHz: number) => ({ at: at(seconds), azimuthDeg: 0, elevationDeg: 10, rangeM: 0, rangeRateMps: 0, dopplerHz, dopplerRateHzPerS: -10, horizonDeg: 5, uncertaintyHz: 4 })
const pass: BenchPass = {
  aos: at(0), culmination: at(10), los: at(20), maxElevationDeg: 10, samples: [sample(0, 100), sample(10, 0), sample(20, -100)],
  table: {
    verdict: 'holds', allowanceHz: 200, limitedBy: 'loss', worstResidualHz: 104, worstAt: at(0), margin: 1.92, budget: { stepsHz: 100, timingHz: 4, ut1Hz: 0, orbitHz: 0, oscillatorHz: 0, trimHz: 0 },
    excess: [], faults: [], workable: [{ from: at(2), to: at(20) }],
    retunes: [{ at: at(-0.05), frequencyHz: 1_000_000, slopeHzPerS: 0, dopplerHz: 100, rangeRateMps: 0, azimuthDeg: 0, elevationDeg: 10, residualMinHz: -100, residualMaxHz: 80, lossDb: 0.1 }],
  },
}

describe('an answer of the bench', () => {
  it('reads in the strips of a pass: needed minus set, with its uncertainty, in the workable part', () => {
    // By hand: a straight fall of 10 Hz/s from +100 Hz against one row on the carrier.
    const strips = benchStrips(pass, { carrierHz: 1_000_000, latencyMs: 50, converter: null })!
    const reading = readingAt(strips, Date.parse(at(5)))
    expect(reading.residualHz).toBeCloseTo(50, 9)
    expect(reading).toMatchObject({ setHz: 0, uncertaintyHz: 4, workable: true, row: 0 })
    expect(readingAt(strips, Date.parse(at(1))).workable).toBe(false)
    expect(strips.effectMs[0]).toBe(Date.parse(at(0)))
  })

  it('has no strips where the link is nowhere workable', () => {
    expect(benchStrips({ ...pass, table: null }, { carrierHz: 1_000_000, latencyMs: 50, converter: null })).toBeNull()
  })

  it('says which end the window cuts off', () => {
    expect([{}, { aosClipped: true }, { losClipped: true }, { aosClipped: true, losClipped: true }].map(clippedWords))
      .toEqual(['', 'already up when the window begins', 'still up when the window ends', 'cut at both ends of the window'])
  })

  it('puts a closed part of the form in a line', () => {
    expect(linkWords({ direction: 'uplink', carrierHz: 437_500_000, symbolRateHz: 1200.5, detector: 'coherent' }).replaceAll('\u202F', ' ')).toBe('uplink 437 500 000 Hz, 1 200.5 symbols/s, coherent')
    const radio = { stepHz: 10, minDwellS: 1, latencyMs: 50 }
    expect(radioWords({ ...radio, ramp: false, maxSlopeHzPerS: 400 })).toBe('10 Hz steps, 1 s between retunes, 50 ms latency')
    expect(radioWords({ ...radio, ramps: true, maxSlopeHzPerS: 400, planMode: 'cadence', cadenceS: 5, converterLoHz: 1e6 }).replaceAll('\u202F', ' '))
      .toBe('10 Hz steps, a retune every 5 s, 50 ms latency, ramps to 400 Hz/s, converter at 1 000 000 Hz')
    expect(budgetWords({ clockErrorMs: 0, alongTrackSigmaS: 0.1, spacecraftPpm: 0, stationPpm: 0.2, ut1BoundS: 0 })).toBe('orbit 0.1 s, oscillators 0 and 0.2 ppm')
    expect(budgetWords({ clockErrorMs: 0, alongTrackSigmaS: 0, spacecraftPpm: 0, stationPpm: 0, ut1BoundS: 0 })).toBe('every uncertainty 0')
  })

  it('lists links under their spacecraft, in the order given', () => {
    const links = [{ id: '1', of: 'B', name: 'x' }, { id: '2', of: 'A', name: 'y' }, { id: '3', of: 'B', name: 'z' }]
    expect(underHeadings(links, link => link.of, link => link.name)).toEqual([{ name: 'B', options: [{ id: '1', name: 'x' }, { id: '3', name: 'z' }] }, { name: 'A', options: [{ id: '2', name: 'y' }] }])
  })
})
