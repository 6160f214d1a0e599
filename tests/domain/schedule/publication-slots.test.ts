import { asc, eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import type { Database } from '../../../server/database/client'
import { openDatabase } from '../../../server/database/client'
import { alerts, audit, slots, tableRevisions } from '../../../server/database/schema'
import { listSlots } from '../../../server/domain/schedule/list-slots'
import { scheduleActor } from '../../../server/domain/context'
import { findDueEvenings } from '../../../server/domain/schedule/evenings'
import { publishNight } from '../../../server/domain/schedule/publish-night'
import { wake } from '../../../server/domain/schedule/wake'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addPass, addPerson, addSpacecraft, addStation, addTable, presentDigest } from '../../support/fixtures'

let test: TestDatabase
let database: Database
let now: Date
let craft: SpacecraftFixture
let station: StationFixture
const minutes = (count: number) => count * 60_000
const after = (ms: number) => new Date(now.getTime() + ms)

beforeEach(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  now = new Date('2026-12-01T12:00:00.000Z')
  craft = await addSpacecraft(database.db, now)
  station = await addStation(database.db, { createdAt: after(-minutes(30)) })
  return async () => {
    await database.close()
    await test.drop()
  }
})

const failures: unknown[] = []
const wakeAt = async (instant: Date, withAlerts = false) => {
  now = instant
  await wake({ db: database.db, now }, { withAlerts, onError: (part, error) => failures.push([part, error]) })
  expect(failures).toEqual([])
}
async function tableAt(aos: Date, given: Parameters<typeof addTable>[4] = {}) {
  return addTable(database.db, craft, station, await addPass(database.db, craft, station, aos), { state: 'approved', inputsDigest: await presentDigest(database.db, now, craft, station), ...given })
}
const stateOf = async (table: { id: string }) => (await database.db.select({ state: tableRevisions.state }).from(tableRevisions).where(eq(tableRevisions.tableId, table.id)))[0]!.state
const slotsOf = (kind: typeof slots.$inferSelect['kind']) => database.db.select().from(slots).where(eq(slots.kind, kind)).orderBy(asc(slots.instant))
const publications = async () => (await database.db.select().from(audit).where(eq(audit.action, 'table.publish'))).length

describe('the evening’s publication', () => {
  it('publishes what is approved for the passes from this evening to the next, at its time and not before', async () => {
    const tonight = await tableAt(new Date('2026-12-01T23:00:00Z'))
    const waits = await tableAt(new Date('2026-12-02T03:00:00Z'), { state: 'drafted' })
    const tomorrow = await tableAt(new Date('2026-12-02T18:00:00Z'))
    await wakeAt(new Date('2026-12-01T17:59:59.999Z'))
    expect(await stateOf(tonight)).toBe('approved')
    await wakeAt(new Date('2026-12-01T18:00:00.000Z'))
    expect([await stateOf(tonight), await stateOf(waits), await stateOf(tomorrow)]).toEqual(['published', 'drafted', 'approved'])
    expect(await slotsOf('publish-night')).toMatchObject([{ entity: station.id, instant: new Date('2026-12-01T18:00:00Z'), outcome: 'Published 1 table, on time.' }])
  })

  // Rules of daylight saving: IANA time zone database (from memory); which instant counts: RFC 5545, section 3.3.5 (a skipped
  // time takes the offset before the gap, a repeated one is its first occurrence).
  it.each([
    ['Europe/Oslo', '02:30', '2027-03-27T12:00:00Z', ['2027-03-28T01:30:00.000Z', '2027-03-29T00:30:00.000Z']],
    ['Europe/Oslo', '02:30', '2027-10-30T12:00:00Z', ['2027-10-31T00:30:00.000Z', '2027-11-01T01:30:00.000Z']],
    ['America/New_York', '02:30', '2027-03-13T12:00:00Z', ['2027-03-14T07:30:00.000Z', '2027-03-15T06:30:00.000Z']],
    ['America/New_York', '01:30', '2027-11-06T12:00:00Z', ['2027-11-07T05:30:00.000Z', '2027-11-08T06:30:00.000Z']],
    ['Australia/Lord_Howe', '02:15', '2027-10-02T10:00:00Z', ['2027-10-02T15:45:00.000Z', '2027-10-03T15:15:00.000Z']],
    ['Australia/Lord_Howe', '01:45', '2027-04-03T10:00:00Z', ['2027-04-03T14:45:00.000Z', '2027-04-04T15:15:00.000Z']],
    ['Asia/Kathmandu', '18:00', '2028-02-28T13:00:00Z', ['2028-02-29T12:15:00.000Z', '2028-03-01T12:15:00.000Z']],
  ])('in %s at %s comes once each local day, from %s on', async (zone, publishAt, from, expected) => {
    const start = new Date(from)
    const local = await addStation(database.db, { zone, publishAt, createdAt: start })
    for (let hours = 0; hours <= 48; hours++) {
      now = new Date(start.getTime() + minutes(60 * hours))
      const deps = { db: database.db, now, actor: scheduleActor }
      for (const night of await findDueEvenings(deps)) await publishNight(deps, night)
    }
    expect((await slotsOf('publish-night')).filter(({ entity }) => entity === local.id).map(({ instant }) => instant.toISOString()).slice(0, 2)).toEqual(expected)
  })

  it('missed for six hours is done at the next wake, for the passes that are left, and says how late', async () => {
    const over = await tableAt(new Date('2026-12-01T20:00:00Z'))
    const frozen = await tableAt(new Date('2026-12-02T00:09:00Z'))
    const coming = await tableAt(new Date('2026-12-02T02:00:00Z'))
    await wakeAt(new Date('2026-12-02T00:00:00.000Z'))
    expect([await stateOf(over), await stateOf(frozen), await stateOf(coming)]).toEqual(['lapsed', 'approved', 'published'])
    expect(await slotsOf('publish-night')).toMatchObject([{ outcome: 'Published 1 table, 6 h 0 min late.' }])
  })

  it('missed for more than a day is recorded, not dropped', async () => {
    await wakeAt(new Date('2026-12-02T20:00:00.000Z'))
    expect((await slotsOf('publish-night')).map(({ outcome }) => outcome)).toEqual([expect.stringMatching(/^Missed: found 26 h 0 min late/), 'Nothing to publish, 2 h 0 min late.'])
  })

  it('happens once when two servers wake at once, and once more changes nothing', async () => {
    const tables = [await tableAt(new Date('2026-12-01T23:00:00Z')), await tableAt(new Date('2026-12-02T01:00:00Z'))]
    const other = openDatabase(test.url)
    now = new Date('2026-12-01T18:00:01.000Z')
    const run = (db: Database['db']) => wake({ db, now }, { withAlerts: true, onError: (part, error) => failures.push([part, error]) })
    await Promise.all([run(database.db), run(other.db), run(database.db), run(other.db)])
    await run(other.db)
    await other.close()
    expect(failures).toEqual([])
    expect(await Promise.all(tables.map(stateOf))).toEqual(['published', 'published'])
    expect(await publications()).toBe(2)
    expect(await slotsOf('publish-night')).toHaveLength(1)
  })

  it('goes on past a table that cannot be published, which raises an alert', async () => {
    await addPerson(database.db, ['on-call'])
    const before = await tableAt(new Date('2026-12-01T22:00:00Z'))
    const broken = await tableAt(new Date('2026-12-01T23:00:00Z'), { retunes: [] })
    const fails = await tableAt(new Date('2026-12-02T00:30:00Z'))
    await database.db.execute(`CREATE FUNCTION fail() RETURNS trigger LANGUAGE plpgsql AS $$ BEGIN RAISE EXCEPTION 'disk full'; END $$`)
    await database.db.execute(`CREATE TRIGGER fail BEFORE UPDATE ON table_revisions FOR EACH ROW WHEN (OLD.table_id = '${fails.id}' AND NEW.state = 'published') EXECUTE FUNCTION fail()`)
    const behind = await tableAt(new Date('2026-12-02T01:00:00Z'))
    await wakeAt(new Date('2026-12-01T18:00:00.000Z'), true)
    expect(await Promise.all([before, broken, fails, behind].map(stateOf))).toEqual(['published', 'approved', 'approved', 'published'])
    expect(await database.db.select().from(alerts).orderBy(asc(alerts.dueAt))).toMatchObject([{ kind: 'publication-failed', tableId: broken.id, state: 'open', severity: 'call' }, { tableId: fails.id, state: 'open', detail: expect.stringMatching(/The fault: disk full$/) }])
    expect(await slotsOf('publish-night')).toMatchObject([{ outcome: 'Published 2 tables, 2 failed, on time.' }])
    await database.db.update(tableRevisions).set({ state: 'held' }).where(eq(tableRevisions.tableId, broken.id))
    await wakeAt(new Date('2026-12-01T18:01:00.000Z'), true)
    expect(await database.db.select().from(alerts)).toEqual(expect.arrayContaining([expect.objectContaining({ tableId: broken.id, state: 'closed' }), expect.objectContaining({ tableId: fails.id, state: 'open' })]))
  })

  it('comes back for a table that is being computed anew', async () => {
    const table = await tableAt(new Date('2026-12-01T23:00:00Z'), { inputsDigest: 'of before' })
    await wakeAt(new Date('2026-12-01T18:00:00.000Z'))
    expect(await slotsOf('publish-night')).toEqual([])
    await database.db.update(tableRevisions).set({ inputsDigest: await presentDigest(database.db, now, craft, station) })
    await wakeAt(new Date('2026-12-01T18:00:05.000Z'))
    expect(await stateOf(table)).toBe('published')
  })

  it('is not owed for evenings before the station was entered', async () => {
    await addStation(database.db, { publishAt: '12:00', createdAt: new Date('2026-12-01T12:00:00.001Z') })
    expect(await findDueEvenings({ db: database.db, now: new Date('2026-12-01T12:30:00Z') })).toEqual([])
  })
})

describe('the publication before a pass', () => {
  it('publishes an hour before AOS what was approved since the evening, once, whatever AOS moves by', async () => {
    const table = await tableAt(new Date('2026-12-01T14:00:00Z'))
    await wakeAt(new Date('2026-12-01T12:59:59.999Z'))
    expect(await stateOf(table)).toBe('approved')
    await wakeAt(new Date('2026-12-01T13:00:00Z'))
    await wakeAt(new Date('2026-12-01T13:00:05Z'))
    expect(await stateOf(table)).toBe('published')
    expect(await slotsOf('publish-lead')).toMatchObject([{ entity: table.id, outcome: 'Published 1 table, on time.' }])
  })

  it('publishes nothing undecided, breaking without its second person, or inside the freeze; at AOS that lapses', async () => {
    const drafted = await tableAt(new Date('2026-12-01T14:00:00Z'), { state: 'drafted' })
    const breaking = await tableAt(new Date('2026-12-01T14:01:00Z'), { margin: 0.5, approvedBy: 'Ada' })
    await wakeAt(new Date('2026-12-01T13:30:00Z'))
    const frozen = await tableAt(new Date('2026-12-01T13:40:00Z'))
    await wakeAt(new Date('2026-12-01T13:30:05Z'))
    expect((await slotsOf('publish-lead')).map(({ outcome }) => outcome)).toEqual(['Not published: drafted, 30 min late.', 'Nothing to publish, 1 without the second person that a breaking table needs, 29 min late.'])
    expect(await Promise.all([drafted, breaking, frozen].map(stateOf))).toEqual(['drafted', 'approved', 'approved'])
    await wakeAt(new Date('2026-12-01T14:01:00Z'))
    expect(await Promise.all([drafted, breaking, frozen].map(stateOf))).toEqual(['lapsed', 'lapsed', 'lapsed'])
  })
})

describe('the list of slots', () => {
  it('names what comes in the next two days, in order and with local time, and what was done', async () => {
    const table = await tableAt(new Date('2026-12-01T23:00:00Z'), { state: 'drafted' })
    const { coming } = await listSlots({ db: database.db, now })
    expect(coming.filter(({ kind }) => kind !== 'roll-forward').map(({ kind, at }) => `${kind} ${at}`)).toEqual([
      'publish-night 2026-12-01T18:00:00.000Z', 'digest 2026-12-01T18:00:00.000Z', 'publish-lead 2026-12-01T22:00:00.000Z', 'publish-night 2026-12-02T18:00:00.000Z', 'digest 2026-12-02T18:00:00.000Z',
    ])
    expect(coming.find(({ entity }) => entity === table.id)).toMatchObject({ name: `${craft.name} at ${station.name}, ${craft.link.name}`, local: '2026-12-01 22:00 (UTC+00:00)' })
    await wakeAt(new Date('2026-12-01T22:00:00Z'))
    const { done } = await listSlots({ db: database.db, now })
    expect(done.map(({ kind, name }) => `${kind} ${name}`).sort()).toEqual([`publish-lead ${craft.name} at ${station.name}, ${craft.link.name}`, `publish-night ${station.name}`, 'roll-forward All predictions'])
  })
})
