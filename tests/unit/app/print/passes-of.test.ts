import { describe, expect, it } from 'vitest'
import type { TableBrief } from '#shared/schemas/tables'
import { passesOf, stationHas } from '~/utils/print/passes-of'

const table = (given: Partial<TableBrief>) => ({ id: 't', passId: 'p', linkName: 'Telemetry', direction: 'downlink', aos: '2026-12-01T03:00:00.000Z', los: '2026-12-01T03:10:00.000Z', maxElevationDeg: 40, spacecraftName: 'Petrel', stationName: 'Cove', state: 'drafted', revision: 1, digest: null, out: null, publishesAt: null, ...given }) as TableBrief
const digest = `967bf541ce28${'0'.repeat(52)}`

// The product's own rules; what a station has is what was published and not taken back.
describe('the shift sheet', () => {
  it('has each pass once, by AOS, with its uplinks before its downlinks', () => {
    const passes = passesOf([
      table({ id: 'late', passId: 'b', aos: '2026-12-01T05:00:00.000Z' }), table({ id: 'down', passId: 'a' }), table({ id: 'up-b', passId: 'a', direction: 'uplink', linkName: 'B' }), table({ id: 'up-a', passId: 'a', direction: 'uplink', linkName: 'A' }),
    ])
    expect(passes.map(({ passId, tables }) => [passId, tables.map(({ id }) => id)])).toEqual([['a', ['up-a', 'up-b', 'down']], ['b', ['late']]])
  })

  it('says which revision the station has by its digest, and what it has not', () => {
    expect(stationHas(table({ state: 'published', revision: 2, digest }))).toBe('r2 967bf541ce28, not collected')
    expect(stationHas(table({ state: 'collected', revision: 2, digest }))).toBe('r2 967bf541ce28, collected')
    // A newer draft does not take from the station what it has.
    expect(stationHas(table({ state: 'drafted', revision: 3, out: { revision: 2, state: 'collected', digest } as TableBrief['out'] }))).toBe('r2 967bf541ce28, collected')
    expect(stationHas(table({ state: 'withdrawn', revision: 2, digest }))).toBe('withdrawn: not to be used')
    expect(stationHas(table({ state: 'approved', publishesAt: '2026-12-01T02:00:00.000Z' }))).toBe('nothing; slot 02:00')
    expect(stationHas(table({ state: 'held' }))).toBe('nothing')
    expect(stationHas(table({ state: 'lapsed' }))).toBe('nothing: lapsed')
  })
})
