import { eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { mails, tableRevisions } from '../../../server/database/schema'
import { useTestDatabase } from '../../support/domain-test'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addPerson, addSpacecraft, addStation } from '../../support/fixtures'
import { approvedTable, day, hour, minute, publications, slotsOf, stateOf, wakeAt } from './support'

const database = useTestDatabase()
const start = new Date('2026-12-01T12:00:00.000Z')
let craft: SpacecraftFixture
let station: StationFixture
beforeEach(async () => {
  craft = await addSpacecraft(database.db, start)
  station = await addStation(database.db, { createdAt: new Date(start.getTime() - 3 * day) })
  // What was owed before the test is done.
  await wakeAt(database.db, start)
})
const tableAt = (aosMs: number, given = {}) => approvedTable(database.db, { now: start, craft, station, aos: new Date(aosMs), ...given })
/** Wakes every ten minutes, and at the beginning. */
async function live(fromMs: number, toMs: number) {
  for (let ms = fromMs; ms <= toMs; ms += 10 * minute) await wakeAt(database.db, new Date(ms))
}
const at = (text: string) => Date.parse(text)
const publicationsOf = async (tables: { id: string }[]) => {
  const all = await publications(database.db)
  return tables.map(({ id }) => all.filter(tableId => tableId === id).length)
}
const eveningsOfStation = async () => (await slotsOf(database.db, 'publish-night')).filter(({ entity }) => entity === station.id)

describe('a clock that is set', () => {
  it.each([['an hour', hour], ['a day', day]])('back by %s publishes nothing again, and what then falls due is done within a minute', async (_, step) => {
    const [tonight, tomorrow] = [await tableAt(at('2026-12-01T20:00:00Z')), await tableAt(at('2026-12-02T20:00:00Z'))]
    await live(at('2026-12-01T17:00:00Z'), at('2026-12-01T18:30:00Z'))
    expect(await publicationsOf([tonight, tomorrow])).toEqual([1, 0])
    await live(at('2026-12-01T18:30:00Z') - step, at('2026-12-01T18:30:00Z'))
    const late = await tableAt(at('2026-12-01T20:30:00Z'))
    await live(at('2026-12-01T18:40:00Z'), at('2026-12-01T19:20:00Z'))
    await wakeAt(database.db, new Date('2026-12-01T19:30:00Z'))
    expect(await stateOf(database.db, late)).toBe('published')
    await live(at('2026-12-01T19:40:00Z'), at('2026-12-02T17:50:00Z'))
    await wakeAt(database.db, new Date('2026-12-02T18:00:00Z'))
    expect(await publicationsOf([tonight, late, tomorrow])).toEqual([1, 1, 1])
    const instants = (await eveningsOfStation()).map(({ instant }) => instant.getTime())
    expect(new Set(instants).size).toBe(instants.length)
  })

  it.each([['an hour', hour], ['a day', day]])('forward by %s does what is due by it at once, and nothing twice when it is right again', async (_, step) => {
    const wrong = at('2026-12-01T17:30:00Z') + step
    const [soon, later] = [await tableAt(wrong + 25 * minute), await tableAt(at('2026-12-04T02:00:00Z'))]
    await live(at('2026-12-01T17:00:00Z'), at('2026-12-01T17:30:00Z'))
    await wakeAt(database.db, new Date(wrong))
    expect(await stateOf(database.db, soon)).toBe('published')
    // Set right after half an hour; the station’s true evenings come after that.
    await live(wrong + 10 * minute, wrong + 30 * minute)
    const between = await tableAt(at('2026-12-01T23:00:00Z'))
    await live(at('2026-12-01T18:00:00Z'), at('2026-12-01T18:00:00Z'))
    expect(await stateOf(database.db, between)).toBe('published')
    await live(at('2026-12-01T18:10:00Z'), at('2026-12-03T18:00:00Z'))
    expect(await publicationsOf([soon, between, later])).toEqual([1, 1, 1])
    expect((await database.db.select().from(tableRevisions).where(eq(tableRevisions.tableId, later.id))).map(({ publishedAt }) => publishedAt!.toISOString())).toEqual(['2026-12-03T18:00:00.000Z'])
  })

  it('does the slot before a pass in its own time, though a clock that ran ahead has been there before', async () => {
    const aos = at('2026-12-02T14:00:00Z')
    const table = await tableAt(aos, { state: 'drafted' })
    await wakeAt(database.db, new Date(aos - 20 * minute))
    expect((await slotsOf(database.db, 'publish-lead')).filter(({ entity }) => entity === table.id)).toMatchObject([{ outcome: 'Not published: drafted, 40 min late.' }])
    await live(at('2026-12-01T20:00:00Z'), at('2026-12-01T20:10:00Z'))
    await database.db.update(tableRevisions).set({ state: 'approved' }).where(eq(tableRevisions.tableId, table.id))
    await wakeAt(database.db, new Date(aos - 60 * minute))
    expect(await stateOf(database.db, table)).toBe('published')
    expect((await slotsOf(database.db, 'publish-lead')).filter(({ entity }) => entity === table.id)).toMatchObject([{ instant: new Date(aos - 60 * minute), outcome: 'Published 1 table, on time.' }])
  })

  it('mails no digest twice', async () => {
    await addPerson(database.db, ['operator'], { createdAt: new Date(start.getTime() - day) })
    const sequence = ['2026-12-01T18:00:00Z', '2026-12-02T18:10:00Z', '2026-12-01T18:20:00Z', '2026-12-02T18:00:00Z', '2026-12-01T18:00:00Z', '2026-12-02T18:20:00Z']
    for (const instant of sequence) await wakeAt(database.db, new Date(instant))
    expect(await database.db.select({ id: mails.id }).from(mails).where(eq(mails.kind, 'digest'))).toHaveLength(2)
  })
})
