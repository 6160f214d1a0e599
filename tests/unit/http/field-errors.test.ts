import { describe, expect, it } from 'vitest'
import { fieldErrors } from '../../../server/http/field-errors'
import { benchPredictBody } from '../../../shared/schemas/bench'

// An error stands at the field that is to be mended: common practice.
const station = { latitudeDeg: 60, longitudeDeg: 10 }
const ask = (change: object) => {
  const result = benchPredictBody.safeParse({ elements: { text: '1' }, station, from: '2026-12-01T00:00:00Z', to: '2026-12-02T00:00:00Z', ...change })
  return result.success ? [] : fieldErrors(result.error.issues).map(({ path }) => path)
}

describe('the fields at fault', () => {
  it.each([
    [{}, []],
    [{ station: { ...station, latitudeDeg: 91 } }, ['station.latitudeDeg']],
    [{ station: { latitudeDeg: 60 } }, ['station.longitudeDeg']],
    [{ station: { stationId: 'nonsense' } }, ['station.stationId']],
    [{ station: { ...station, mask: [{ azimuthDeg: 0, elevationDeg: 5 }, { azimuthDeg: 400, elevationDeg: 5 }] } }, ['station.mask.1.azimuthDeg']],
    [{ link: { carrierHz: -1, symbolRateHz: 'fast' } }, ['link.carrierHz', 'link.symbolRateHz']],
  ])('are those of the alternative that was meant: %j', (change, paths) => {
    expect(ask(change)).toEqual(paths)
  })

  it.each([[{ station: 5 }, 'station'], [{ station: {} }, 'station'], [{ station: { ...station, stationId: 'x' } }, 'station'], [{ radio: { nonsense: 1 } }, 'radio']])('are the whole where none or both may have been meant: %j', (change, path) => {
    expect(ask(change)).toEqual([path])
  })
})
