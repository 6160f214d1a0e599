import { asc, eq } from 'drizzle-orm'
import { beforeAll, describe, expect, it } from 'vitest'
import { passes, spacecraft } from '~~/server/database/schema'
import { readCalendar } from '~~/server/domain/calendar/read-calendar'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { useTestDatabase } from '../../support/domain-test'
import type { Fleet } from '../prediction/fleet'
import { addSet, ahead, createFleet, referenceElements, useSet, windowStart } from '../prediction/fleet'

// RFC 5546, section 2.1.4: SEQUENCE counts up when DTSTART or DTEND changes or the event is cancelled; UID stays.
const test = useTestDatabase()
const now = windowStart
let fleet: Fleet
beforeAll(async () => {
  fleet = await createFleet(test.db)
  await predict()
})

const predict = () => predictStation({ db: test.db, now }, { ...fleet, reason: 'A test asks.' })
const shown = async () => (await readCalendar({ db: test.db, now }, { stationId: fleet.stationId, name: 'Passes' })).passes
const stored = () => test.db.select().from(passes).where(eq(passes.stationId, fleet.stationId)).orderBy(asc(passes.culmination))
async function useShifted(seconds: number) {
  await useSet(test.db, fleet.spacecraftId, await addSet(test.db, fleet.spacecraftId, ahead(referenceElements('SSO500'), seconds)))
  await predict()
}
const second = (date: Date) => Math.floor(date.getTime() / 1000)

describe('a pass in the calendar', () => {
  it('counts up when newer elements move it by a second or more, and keeps its id', async () => {
    const before = await shown()
    expect(new Set(before.map(({ sequence }) => sequence))).toEqual(new Set([0]))
    await useShifted(-3)
    const after = await shown()
    // Three seconds behind along its orbit: every pass comes some three seconds later (mechanics).
    const moved = before.map(pass => ({ pass, now: after.find(({ id }) => id === pass.id)! }))
    expect(moved.length).toBeGreaterThan(10)
    for (const { pass, now } of moved) {
      expect((now.aos.getTime() - pass.aos.getTime()) / 1000).toBeGreaterThan(1)
      expect(now.sequence).toBe(1)
    }
  })

  it('does not while every time that is shown is the same, and does as soon as one is another', async () => {
    const before = await stored()
    await predict()
    expect((await stored()).map(({ calendarSequence }) => calendarSequence)).toEqual(before.map(({ calendarSequence }) => calendarSequence))
    await useShifted(-3.05)
    const after = await stored()
    const changed = after.map(pass => ({ pass, former: before.find(({ id }) => id === pass.id)! }))
    const shownAnew = changed.filter(({ pass, former }) => second(pass.aos) !== second(former.aos) || second(pass.los) !== second(former.los))
    // A twentieth of a second crosses the second for some, not for all.
    expect(shownAnew.length).toBeGreaterThan(0)
    expect(shownAnew.length).toBeLessThan(changed.length)
    for (const { pass, former } of changed) expect(pass.calendarSequence - former.calendarSequence, pass.id).toBe(shownAnew.some(({ pass: { id } }) => id === pass.id) ? 1 : 0)
  })

  it('is cancelled when it is no longer predicted, and comes back as itself, counting up each time', async () => {
    const before = await shown()
    const [craft] = await test.db.select().from(spacecraft).where(eq(spacecraft.id, fleet.spacecraftId))
    const inUse = (inUseSetId: string | null) => test.db.update(spacecraft).set({ inUseSetId }).where(eq(spacecraft.id, fleet.spacecraftId))
    await inUse(null)
    await predict()
    const gone = await shown()
    expect(gone.map(({ id, gone, sequence }) => [id, gone, sequence])).toEqual(before.map(({ id, sequence }) => [id, true, sequence + 1]))
    await predict()
    expect((await shown()).map(({ sequence }) => sequence)).toEqual(gone.map(({ sequence }) => sequence))
    await inUse(craft!.inUseSetId)
    await predict()
    expect((await shown()).map(({ id, gone, sequence }) => [id, gone, sequence])).toEqual(before.map(({ id, sequence }) => [id, false, sequence + 2]))
  })
})
