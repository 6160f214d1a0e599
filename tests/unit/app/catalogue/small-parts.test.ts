import { describe, expect, it } from 'vitest'
import { z } from 'zod'
import { changedFields } from '~/utils/catalogue/changed-fields'
import { stationsInRange } from '~/utils/catalogue/covers'
import { echoHertz } from '~/utils/catalogue/echo-hertz'
import { horizonLine } from '~/utils/catalogue/horizon-line'
import { positionText } from '~/utils/catalogue/position'
import { plainIssue } from '~/utils/plain-issue'

describe('a typed frequency', () => {
  it.each([[437_512_340, '437\u202F512\u202F340 Hz, 437.51234 MHz'], [9600, '9\u202F600 Hz, 9.6 kHz'], [401_220_000.5, '401\u202F220\u202F000.5 Hz, 401.220001 MHz'], [-116e6, '\u2212116\u202F000\u202F000 Hz, \u2212116 MHz']])('%d is read back as %s', (hz, words) => {
    expect(echoHertz(hz)).toBe(words)
  })

  it('is not read back when it is short, missing or not a number', () => {
    expect([0, 999, null, Number.NaN].map(echoHertz)).toEqual([undefined, undefined, undefined, undefined])
  })
})

describe('a form that changes something', () => {
  it('sends only what differs, lists compared by what they hold', () => {
    const before = { name: 'Fjellvik', limit: null, mask: [{ azimuthDeg: 0 }], id: 'kept by the server' }
    expect(changedFields(before, { name: 'Fjellvik', limit: null, mask: [{ azimuthDeg: 0 }] })).toEqual({})
    expect(changedFields<object>(before, { name: 'Fjellvik', limit: 12, mask: [] })).toEqual({ limit: 12, mask: [] })
  })

  it('says in plain words what is missing or out of range', () => {
    const schema = z.object({ hz: z.number().max(5), name: z.string(), own: z.number().positive('More than zero.') })
    const say = (given: unknown) => Object.fromEntries(schema.safeParse(given).error!.issues.map(issue => [issue.path.join('.'), plainIssue(issue)]))
    expect(say({ hz: null, own: 0 })).toEqual({ hz: 'Give a number.', name: 'Fill this in.', own: 'More than zero.' })
    expect(say({ hz: 6, name: '', own: 1 })).toEqual({ hz: 'At most 5.' })
  })
})

describe('the drawn horizon', () => {
  it('is the mask, linear across north, and the minimum elevation where that is higher', () => {
    // By hand: from 350° (10°) to 10° (20°), north lies half-way.
    const line = horizonLine([{ azimuthDeg: 350, elevationDeg: 10 }, { azimuthDeg: 10, elevationDeg: 20 }], 12)
    const at = (deg: number) => line.find(point => point.azimuthDeg === deg)!.elevationDeg
    expect(at(0)).toBeCloseTo(15, 9)
    expect(at(360)).toBeCloseTo(15, 9)
    expect(at(350)).toBeCloseTo(12, 9)
    expect(at(180)).toBeCloseTo(15, 9)
  })

  it('leaves out points that are still being typed', () => {
    expect(horizonLine([{ azimuthDeg: null as unknown as number, elevationDeg: 30 }, { azimuthDeg: 400, elevationDeg: 30 }], 5).every(point => Math.abs(point.elevationDeg - 5) < 1e-9)).toBe(true)
  })
})

describe('the catalogue in words', () => {
  it('gives a position with its hemispheres', () => {
    expect(positionText({ latitudeDeg: -21.131, longitudeDeg: 55.412 })).toBe('21.131° S, 55.412° E')
  })

  it('names the stations whose radio works in the link’s direction and tunes to its carrier', () => {
    const radio = { transmits: false, receives: true, tuneLowHz: 399e6, tuneHighHz: 403e6 }
    const station = (name: string, ...radios: object[]) => ({ name, antennas: [{ radios }] }) as never
    const stations = [station('Fjellvik', radio), station('Kestrel Plain', { ...radio, receives: false, transmits: true }), station('Anse Corail')]
    expect(stationsInRange({ direction: 'downlink', carrierHz: 401.22e6 }, stations)).toEqual(['Fjellvik'])
    expect(stationsInRange({ direction: 'uplink', carrierHz: 401.22e6 }, stations)).toEqual(['Kestrel Plain'])
    for (const carrierHz of [398e6, 437e6]) expect(stationsInRange({ direction: 'downlink', carrierHz }, stations)).toEqual([])
  })
})
