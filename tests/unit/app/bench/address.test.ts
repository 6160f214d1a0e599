import { describe, expect, it } from 'vitest'
import { fromAddress, longestTextInAddress, toAddress } from '~/utils/bench/address'
import { exampleQuestion } from '~/utils/bench/example'
import { blankQuestion } from '~/utils/bench/question'
import type { BenchQuestion } from '~/utils/bench/question'

const now = Date.parse('2026-11-30T18:00:41.000Z')
const later = now + 3 * 3_600_000
/** As a browser sends it to a colleague. */
const travelled = (question: BenchQuestion) => fromAddress(Object.fromEntries(new URLSearchParams(new URLSearchParams(toAddress(question)).toString())), later)

describe('a question in the address', () => {
  it('is only its window when nothing but the defaults is asked', () => {
    expect(toAddress(blankQuestion(now))).toEqual({ from: '2026-11-30 18:00', to: '2026-12-01 18:00' })
  })

  it('arrives as it was sent, hours later too', () => {
    expect(travelled(exampleQuestion(now))).toEqual(exampleQuestion(now))
  })

  it('carries every field that was changed', () => {
    const asked: BenchQuestion = {
      elements: { source: 'given', id: '00000000-0000-4000-8000-000000000001', text: 'a + b & c = d\n  e' },
      station: { source: 'given', id: 's', latitudeDeg: -12.5, longitudeDeg: 200, heightM: 3, minElevationDeg: 0, mask: [{ azimuthDeg: 10.5, elevationDeg: -1 }, { azimuthDeg: 350, elevationDeg: 7 }] },
      window: { from: '2026-12-01 00:00', to: '2026-12-02T00:00:00+01:00', sampleIntervalS: 0.5, ut1MinusUtcS: -0.1 },
      link: { source: 'held', id: 'l', direction: 'uplink', carrierHz: 2.1e9, symbolRateHz: 1200.5, detector: 'stated', permittedLossDb: 1, limitHz: 900, captureRangeHz: 1, filterBandwidthHz: 2, rolloff: 0.35, driftLimitHzPerS: 3, jumpLimitHz: 4, errorRate: 1e-6, esN0Db: 12.5, bandwidthHz: 125_000, spreadingFactor: 9, turnaround: { numerator: 880, denominator: 749, uplinkPrecompensated: true, uplinkHz: 7.2e9 } },
      radio: { source: 'held', id: 'r', stepHz: 0.001, offsetHz: -5, minDwellS: 0, latencyMs: 0, latencyUncertaintyMs: 2, ramp: true, slopeStepHzPerS: 0.5, maxSlopeHzPerS: 400 },
      budget: { clockErrorMs: 1, alongTrackSigmaS: 2, spacecraftPpm: 3, stationPpm: 4, ut1BoundS: 0.5, k: 0 },
      offsetHz: -250,
    }
    expect(travelled(asked)).toEqual(asked)
  })

  it('carries a turnaround without an uplink of its own, and takes a garbled one for none', () => {
    const question = blankQuestion(now)
    question.link.turnaround = { numerator: 240, denominator: 221, uplinkPrecompensated: false, uplinkHz: null }
    expect(toAddress(question).turn).toBe('240:221:0')
    expect(travelled(question).link.turnaround).toEqual(question.link.turnaround)
    expect(fromAddress({ turn: '240/221' }, now).link.turnaround).toBeNull()
  })

  it('keeps a field that was emptied empty', () => {
    const question = blankQuestion(now)
    question.link.symbolRateHz = null as unknown as number
    expect(travelled(question).link.symbolRateHz).toBeNull()
  })

  it('leaves out element text that is too long for one', () => {
    const question = { ...blankQuestion(now), elements: { source: 'given' as const, id: null, text: 'x'.repeat(longestTextInAddress + 1) } }
    expect(travelled(question).elements).toEqual({ source: 'given', id: null, text: '' })
  })

  it('reads what makes no sense as an empty form would have it', () => {
    expect(fromAddress({ lat: 'north', det: 'magic', e: 'x', mask: '1:2_x_:', f: ['1', '2'], k: '', hz: 'NaN' }, now)).toEqual({
      ...blankQuestion(now),
      station: { ...blankQuestion(now).station, mask: [{ azimuthDeg: 1, elevationDeg: 2 }] },
      budget: { ...blankQuestion(now).budget, k: null },
    })
  })
})
