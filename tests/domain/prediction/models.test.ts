import { describe, expect, it } from 'vitest'
import type { LinkRow, RadioRow } from '~~/server/domain/prediction/models'
import { dopplerRoomHz, radioFor, radioModelOf } from '~~/server/domain/prediction/models'
import { publishedRadio } from '~~/server/domain/tables/published-table-of'
import { referenceElements } from './fleet'

const elements = referenceElements('SSO500')
const link = { direction: 'downlink', carrierHz: 437.5e6, turnaroundNumerator: null, turnaroundDenominator: null } as LinkRow
const radio = (id: string, fields: Partial<RadioRow> = {}) => ({ id, name: id, transmits: false, receives: true, tuneLowHz: 430e6, tuneHighHz: 440e6, stepHz: 10, retiredAt: null, ...fields }) as RadioRow

describe('a radio as its tables are planned on it', () => {
  const stepping = { ramps: false, slopeStepHzPerS: 1, maxSlopeHzPerS: 500, planMode: 'fewest', cadenceS: 5, converterLoHz: null, converterInverts: false } as const

  it('has a ramp, a cadence and a converter only where it is said to', () => {
    expect(radioModelOf(radio('a', stepping))).toMatchObject({ ramp: null, cadenceS: null, converter: null })
    expect(radioModelOf(radio('a', { ...stepping, ramps: true, planMode: 'cadence', converterLoHz: 465e6, converterInverts: true })))
      .toMatchObject({ ramp: { slopeStepHzPerS: 1, maxSlopeHzPerS: 500 }, cadenceS: 5, converter: { loHz: 465e6, inverts: true } })
  })

  it('is published with ramp and converter where it has them, and as before where not', () => {
    expect(publishedRadio(radio('a', { ...stepping, offsetHz: 0, minDwellS: 1, latencyMs: 50 }))).toEqual({ id: 'a', name: 'a', stepHz: 10, offsetHz: 0, minDwellS: 1, latencyMs: 50 })
    expect(publishedRadio(radio('a', { ...stepping, ramps: true, converterLoHz: 400e6 })))
      .toMatchObject({ ramp: { slopeStepHzPerS: 1, maxSlopeHzPerS: 500 }, converter: { loHz: 400e6, inverts: false } })
  })
})

describe('the radio that serves a link', () => {
  it('leaves room for the Doppler shift of the orbit', () => {
    // First-order Doppler at the horizon for 500 km at 437 MHz is 10 377 Hz (mechanics); the room is no less and not much more.
    const room = dopplerRoomHz(437e6, elements)
    expect(room).toBeGreaterThan(10_377)
    expect(room).toBeLessThan(1.2 * 10_377)
    expect(radioFor(link, elements, [radio('a', { tuneHighHz: 437.505e6 })])).toBeNull()
    expect(radioFor(link, elements, [radio('a', { tuneLowHz: 437.495e6 })])).toBeNull()
    expect(radioFor(link, elements, [radio('a', { tuneLowHz: 437.485e6, tuneHighHz: 437.515e6 })])?.id).toBe('a')
  })

  it('leaves twice the room for a coherent link’s two legs, and once where its uplink is pre-compensated', () => {
    // 10 377 Hz at the horizon for 437 MHz (mechanics), twice 20 754 Hz.
    const coherent = { ...link, turnaroundNumerator: 240, turnaroundDenominator: 221, uplinkPrecompensated: false }
    const narrow = [radio('a', { tuneLowHz: 437.485e6, tuneHighHz: 437.515e6 })]
    expect(radioFor(coherent, elements, narrow)).toBeNull()
    expect(radioFor({ ...coherent, uplinkPrecompensated: true }, elements, narrow)?.id).toBe('a')
    expect(radioFor(coherent, elements, [radio('a', { tuneLowHz: 437.47e6, tuneHighHz: 437.53e6 })])?.id).toBe('a')
  })

  it('works in the link’s direction and is not retired', () => {
    expect(radioFor({ ...link, direction: 'uplink' }, elements, [radio('a')])).toBeNull()
    expect(radioFor(link, elements, [radio('a', { receives: false, transmits: true })])).toBeNull()
    expect(radioFor(link, elements, [radio('a', { retiredAt: new Date(0) })])).toBeNull()
  })

  it('is the one with the finest step, then the first by name, whatever their order', () => {
    const radios = [radio('b'), radio('a'), radio('c', { stepHz: 100 })]
    expect(radioFor(link, elements, radios)?.id).toBe('a')
    expect(radioFor(link, elements, [...radios].reverse())?.id).toBe('a')
    expect(radioFor(link, elements, [...radios, radio('d', { stepHz: 1 })])?.id).toBe('d')
  })
})
