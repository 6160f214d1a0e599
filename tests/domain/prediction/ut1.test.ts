import { asc, eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { passes, settings, stations } from '~~/server/database/schema'
import { loadInputs } from '~~/server/domain/prediction/load-inputs'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { useTestDatabase } from '../../support/domain-test'
import { createFleet, windowStart as now } from './fleet'

const test = useTestDatabase()
/** A sidereal turn a day: 15.04107 arc seconds of the Earth in a second of UT1 (handbook value). */
const TURN_DEG_PER_S = 15.04107 / 3600

const enter = (ut1MinusUtcS: number, validUntil: string) =>
  test.db.insert(settings).values({ key: 'ut1', value: { ut1MinusUtcS, validUntil } }).onConflictDoUpdate({ target: settings.key, set: { value: { ut1MinusUtcS, validUntil } } })
const culminationsOf = async (changes: Partial<typeof stations.$inferInsert> = {}) => {
  const fleet = await createFleet(test.db, { station: 'S42' })
  if (Object.keys(changes).length > 0) await test.db.update(stations).set(changes).where(eq(stations.id, fleet.stationId))
  await predictStation({ db: test.db, now }, { ...fleet, reason: 'A test asks.' })
  const rows = await test.db.select().from(passes).where(eq(passes.spacecraftId, fleet.spacecraftId)).orderBy(asc(passes.culmination))
  return rows.map(pass => [pass.aos.getTime(), pass.culmination.getTime(), pass.los.getTime()] as const)
}

beforeEach(async () => {
  await test.db.delete(settings).where(eq(settings.key, 'ut1'))
})

describe('UT1 − UTC in predictions', () => {
  it('is the station that much further on with the Earth', async () => {
    // Source: mechanics. 0.6 s of UT1 turn the Earth by 9.02″, as a station as much further east.
    const fleet = await createFleet(test.db, { station: 'S42' })
    const [place] = await test.db.select().from(stations).where(eq(stations.id, fleet.stationId))
    const plain = await culminationsOf()
    const east = await culminationsOf({ longitudeDeg: place!.longitudeDeg + 0.6 * TURN_DEG_PER_S })
    await enter(0.6, '2027-01-01T00:00:00.000Z')
    const turned = await culminationsOf()
    expect(turned).toHaveLength(east.length)
    turned.forEach((instants, i) => instants.forEach((at, k) => expect(Math.abs(at - east[i]![k]!)).toBeLessThanOrEqual(2)))
    expect(Math.max(...turned.flatMap((instants, i) => instants.map((at, k) => Math.abs(at - plain[i]![k]!))))).toBeGreaterThan(20)
  })

  it('counts, with its small bound, until the day it is valid to, and as unset from then on', async () => {
    // Bounds: leap seconds keep |UT1 − UTC| below 0.9 s (ITU-R TF.460); a bulletin's value is taken to be good to 0.05 s.
    const fleet = await createFleet(test.db)
    const inForce = async (at: Date) => {
      const { ut1, served } = await loadInputs({ db: test.db, now: at }, fleet)
      return { ut1, budgets: served.map(({ budget: { ut1MinusUtcS, ut1BoundS } }) => [ut1MinusUtcS, ut1BoundS]), digests: served.map(({ digest }) => digest) }
    }
    const unset = await inForce(now)
    expect(unset.budgets).toEqual([[0, 0.9], [0, 0.9]])
    await enter(-0.13, '2026-12-02T00:00:00.000Z')
    expect((await inForce(now)).budgets).toEqual([[-0.13, 0.05], [-0.13, 0.05]])
    expect(await inForce(new Date('2026-12-02T00:00:00.000Z'))).toEqual(unset)
  })
})
