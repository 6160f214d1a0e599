import { eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import type { MeanElements } from '#shared/physics/types'
import { elementSets, spacecraft, tableRevisions } from '~~/server/database/schema'
import { compareElementSet } from '~~/server/domain/elements/compare-element-set'
import { accuracyOf } from '~~/server/domain/prediction/accuracy-of'
import { loadInputs } from '~~/server/domain/prediction/load-inputs'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { normalErrors, setAt } from '../../support/set-history'
import type { Fleet } from './fleet'
import { addSet, createFleet, useSet } from './fleet'

// Histories of known error: each set is one true orbit's, gaining a stated time a day. The spread is 7.616 km/s (√(GM/a)
// at 15.2 rev/day, mechanics) times that a day.
const test = useTestDatabase()
const prior = { floorKm: 0.5, growthKmPerDay: 1.5 }
const errors = normalErrors(31, 11)
const gaining = (day: number, sPerDay = 0.5): MeanElements => setAt(day, { gainSPerDay: sPerDay * errors[day]! })
/** The day after the thirtieth set. */
const now = new Date(setAt(30).epochUtcUs / 1000)
let fleet: Fleet

beforeEach(async () => {
  fleet = await createFleet(test.db, { elements: gaining(29) })
})

const deps = { get db() { return test.db } }
const addPast = async (days: readonly number[]): Promise<string[]> => {
  const ids = []
  for (const day of days) ids.push(await addSet(test.db, fleet.spacecraftId, gaining(day)))
  return ids
}
const inputs = () => loadInputs({ db: test.db, now }, fleet)
const alongTrack = async () => (await inputs()).served[0]!.budget.alongTrack
const first = (count: number) => Array.from({ length: count }, (_, i) => i)

describe('how fast elements age, from a spacecraft’s own sets', () => {
  it('is the prior while there is the set in use alone, and learned once there is a history', async () => {
    expect(await accuracyOf(deps, fleet.spacecraftId)).toEqual({ source: 'prior', pairs: 0, bins: [], ...prior, prior })
    expect(await alongTrack()).toMatchObject(prior)
    await addPast(first(29))
    const learned = await accuracyOf(deps, fleet.spacecraftId)
    // 30 sets a day apart, ages to 14 days: 16·14 + 13·14/2 pairs (combinatorics)
    expect(learned).toMatchObject({ source: 'learned', pairs: 315, floorKm: 0.5, prior })
    for (const age of [3, 7]) expect(Math.abs((learned.floorKm + learned.growthKmPerDay * age) / (0.5 * age * 7.616) - 1)).toBeLessThan(0.25)
    expect(await alongTrack()).toMatchObject({ floorKm: learned.floorKm, growthKmPerDay: learned.growthKmPerDay })
  })

  it('gives way to what is stated on the spacecraft, figure by figure', async () => {
    await addPast(first(29))
    const { growthKmPerDay } = await accuracyOf(deps, fleet.spacecraftId)
    await test.db.update(spacecraft).set({ alongTrackFloorKm: 2 }).where(eq(spacecraft.id, fleet.spacecraftId))
    expect(await accuracyOf(deps, fleet.spacecraftId)).toMatchObject({ source: 'stated', pairs: 315, floorKm: 2, growthKmPerDay })
    await test.db.update(spacecraft).set({ alongTrackGrowthKmPerDay: 4 }).where(eq(spacecraft.id, fleet.spacecraftId))
    expect(await alongTrack()).toMatchObject({ floorKm: 2, growthKmPerDay: 4 })
  })

  it('counts waiting and past sets, and refused ones no longer', async () => {
    const [one, two] = await addPast([26, 27, 28])
    expect((await accuracyOf(deps, fleet.spacecraftId)).pairs).toBe(6)
    await test.db.update(elementSets).set({ state: 'past' }).where(eq(elementSets.id, one!))
    expect((await accuracyOf(deps, fleet.spacecraftId)).pairs).toBe(6)
    await test.db.update(elementSets).set({ state: 'refused' }).where(eq(elementSets.id, two!))
    expect((await accuracyOf(deps, fleet.spacecraftId)).pairs).toBe(3)
  })

  it('is not moved by a newer set until that is put into use, so that a nightly set leaves the tables alone', async () => {
    await addPast(first(29))
    const before = await inputs()
    await predictStation({ db: test.db, now }, { ...fleet, reason: 'A test asks.' })
    const rows = await test.db.select().from(tableRevisions)
    const newer = await addSet(test.db, fleet.spacecraftId, gaining(30, 20))
    expect((await inputs()).served.map(({ digest }) => digest)).toEqual(before.served.map(({ digest }) => digest))
    expect(await predictStation({ db: test.db, now }, { ...fleet, reason: 'Rolled forward.' })).toMatchObject({ revisions: { drafted: 0, recomputed: 0 } })
    expect(await test.db.select().from(tableRevisions)).toEqual(rows)
    await useSet(test.db, fleet.spacecraftId, newer)
    // 31 sets: 17·14 + 13·14/2
    expect(await accuracyOf(deps, fleet.spacecraftId)).toMatchObject({ pairs: 329 })
  })

  it('goes into what the tables are made from: a history that shows more sets them anew', async () => {
    const before = await inputs()
    await addPast(first(29))
    const after = await inputs()
    expect(after.served).toHaveLength(2)
    after.served.forEach(({ digest }, i) => expect(digest).not.toBe(before.served[i]!.digest))
  })

  it('says of a candidate whether what flies now explains its distance', async () => {
    await addPast(first(29))
    // Half a second a day over a day: 3.8 km and 5 km apart, 60 s are 457 km (mechanics).
    const likely = await addSet(test.db, fleet.spacecraftId, setAt(30))
    const other = await addSet(test.db, fleet.spacecraftId, setAt(30, { aheadS: 60 }))
    const codes = async (id: string) => (await compareElementSet({ db: test.db, now }, { id })).warnings.map(({ code }) => code)
    expect(await codes(likely)).not.toContain('along-track-jump')
    expect(await codes(other)).toContain('along-track-jump')
  })

  it('takes the low orbit’s prior where no set is held, and knows no spacecraft that is not there', async () => {
    const [bare] = await test.db.insert(spacecraft).values({ name: 'Plover' }).returning()
    expect(await accuracyOf(deps, bare!.id)).toMatchObject({ source: 'prior', pairs: 0, ...prior })
    expect(await refusalOf(accuracyOf(deps, '00000000-0000-4000-8000-000000000000'))).toMatchObject({ code: 'not-found' })
  })
})
