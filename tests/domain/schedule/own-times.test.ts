import { beforeEach, describe, expect, it } from 'vitest'
import type { PersonActor } from '../../../server/domain/context'
import { scheduleActor } from '../../../server/domain/context'
import { changeStation } from '../../../server/domain/catalogue/change-station'
import { findDueEvenings } from '../../../server/domain/schedule/evenings'
import { listSlots } from '../../../server/domain/schedule/list-slots'
import { previewSlots } from '../../../server/domain/schedule/preview-slots'
import { listPublicationRules, removePublicationRule, setPublicationRule } from '../../../server/domain/schedule/publication-rules'
import { publishNight } from '../../../server/domain/schedule/publish-night'
import { getBrief } from '../../../server/domain/tables/table-brief'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addActor, addLink, addPass, addSpacecraft, addStation, addTable, presentDigest } from '../../support/fixtures'
import { approvedTable, day, hour, minute, slotsOf, stateOf, wakeAt } from './support'

const database = useTestDatabase()
const start = new Date('2026-12-01T12:00:00.000Z')
let admin: PersonActor
let craft: SpacecraftFixture
let station: StationFixture
let own: SpacecraftFixture
beforeEach(async () => {
  const { db } = database
  admin = await addActor(db, ['administrator'])
  craft = await addSpacecraft(db, start)
  own = await addSpacecraft(db, start)
  station = await addStation(db, { createdAt: new Date(start.getTime() - hour) })
})
const deps = (now = start) => ({ db: database.db, actor: admin, now })
const tableAt = (of: SpacecraftFixture, aos: string, given = {}) => approvedTable(database.db, { now: start, craft: of, station, aos: new Date(aos), ...given })
const give = (times: { publishAt?: string | null, leadMinutes?: number | null }, now = start) => setPublicationRule(deps(now), { stationId: station.id, linkId: own.link.id, publishAt: null, leadMinutes: null, ...times })
const wake = (instant: string) => wakeAt(database.db, new Date(instant))
const states = (...tables: { id: string }[]) => Promise.all(tables.map(table => stateOf(database.db, table)))

describe('a link with a time of day of its own', () => {
  it('is published at its time, and the station’s others at theirs', async () => {
    await give({ publishAt: '20:30' })
    const [others, itsOwn] = [await tableAt(craft, '2026-12-01T23:00:00Z'), await tableAt(own, '2026-12-01T23:30:00Z')]
    await wake('2026-12-01T18:00:00Z')
    expect(await states(others, itsOwn)).toEqual(['published', 'approved'])
    await wake('2026-12-01T20:29:59Z')
    expect(await states(itsOwn)).toEqual(['approved'])
    await wake('2026-12-01T20:30:00Z')
    expect(await states(itsOwn)).toEqual(['published'])
    const mine = (await slotsOf(database.db, 'publish-night')).filter(({ entity }) => entity.startsWith(station.id))
    expect(mine.map(({ entity, instant, outcome }) => [entity, instant.toISOString(), outcome])).toEqual([
      [station.id, '2026-12-01T18:00:00.000Z', 'Published 1 table, on time.'], [`${station.id}:${own.link.id}`, '2026-12-01T20:30:00.000Z', 'Published 1 table, on time.'],
    ])
  })

  it('covers the passes until its own next evening', async () => {
    await give({ publishAt: '20:30' })
    const [before, after] = [await tableAt(own, '2026-12-02T20:29:00Z'), await tableAt(own, '2026-12-02T20:31:00Z')]
    await wake('2026-12-01T20:30:00Z')
    expect(await states(before, after)).toEqual(['published', 'approved'])
  })

  it('says when it goes out, as the schedule then does it', async () => {
    const table = await tableAt(own, '2026-12-01T23:30:00Z')
    const goesOut = async () => (await getBrief({ db: database.db, now: start }, table.id)).publishesAt
    expect(await goesOut()).toBe('2026-12-01T18:00:00.000Z')
    await give({ publishAt: '20:30' })
    expect(await goesOut()).toBe('2026-12-01T20:30:00.000Z')
    await give({ publishAt: '11:00', leadMinutes: 25 })
    expect(await goesOut()).toBe('2026-12-01T23:05:00.000Z')
  })

  it('follows the station again when its rule is taken away', async () => {
    const { id } = await give({ publishAt: '20:30' })
    await removePublicationRule(deps(), id)
    expect((await listPublicationRules({ db: database.db }, { stationId: station.id })).items).toEqual([])
    const table = await tableAt(own, '2026-12-01T23:30:00Z')
    await wake('2026-12-01T18:00:00Z')
    expect(await states(table)).toEqual(['published'])
  })

  it('owes nothing of the evenings before its time was given, nor a station before its own was changed', async () => {
    await give({ publishAt: '11:00' })
    await changeStation(deps(), station.id, { publishAt: '10:00' })
    const owed = async (now: string) => (await findDueEvenings({ db: database.db, now: new Date(now) })).filter(due => due.station.id === station.id).map(({ link, instant }) => `${link ? 'link' : 'station'} ${instant.toISOString()}`)
    expect(await owed('2026-12-01T12:00:01Z')).toEqual([])
    expect(await owed('2026-12-02T11:00:00Z')).toEqual(['station 2026-12-02T10:00:00.000Z', 'link 2026-12-02T11:00:00.000Z'])
  })

  // Rules of daylight saving: the IANA time zone database, offsets worked out by hand; which instant counts: RFC 5545, section 3.3.5.
  it.each([
    // Skipped 02:00 to 03:00 in Oslo on 28 March 2027, repeated on 31 October.
    ['Europe/Oslo', '02:30', '2027-03-26T12:00:00Z', ['2027-03-27T01:30:00.000Z', '2027-03-28T01:30:00.000Z', '2027-03-29T00:30:00.000Z']],
    ['Europe/Oslo', '02:30', '2027-10-29T12:00:00Z', ['2027-10-30T00:30:00.000Z', '2027-10-31T00:30:00.000Z', '2027-11-01T01:30:00.000Z']],
    // St John’s is at UTC-3:30, in summer at UTC-2:30, from 02:00 on 14 March to 02:00 on 7 November 2027.
    ['America/St_Johns', '02:15', '2027-03-13T12:00:00Z', ['2027-03-14T05:45:00.000Z', '2027-03-15T04:45:00.000Z']],
    ['America/St_Johns', '01:15', '2027-11-06T12:00:00Z', ['2027-11-07T03:45:00.000Z', '2027-11-08T04:45:00.000Z']],
    // The leap day of 2028 in Chatham: UTC+13:45 in its summer.
    ['Pacific/Chatham', '06:00', '2028-02-27T18:00:00Z', ['2028-02-28T16:15:00.000Z', '2028-02-29T16:15:00.000Z']],
  ])('in %s at %s comes once each local day, from %s on', async (zone, publishAt, from, expected) => {
    const begin = new Date(from)
    const place = await addStation(database.db, { zone, publishAt: '12:00', createdAt: begin })
    await setPublicationRule(deps(begin), { stationId: place.id, linkId: own.link.id, publishAt, leadMinutes: null })
    for (let hours = 0; hours <= 72; hours++) {
      const now = new Date(begin.getTime() + hours * hour)
      const given = { db: database.db, now, actor: scheduleActor }
      for (const due of await findDueEvenings(given)) if (due.station.id === place.id) await publishNight(given, due)
    }
    const done = (await slotsOf(database.db, 'publish-night')).filter(({ entity }) => entity === `${place.id}:${own.link.id}`).map(({ instant }) => instant.toISOString())
    expect(done.slice(0, expected.length)).toEqual(expected)
    expect(done).toHaveLength(3)
  })
})

describe('a link with a lead of its own', () => {
  it('goes out that long before AOS, and is called for a decision by it', async () => {
    await give({ leadMinutes: 30 })
    const [others, itsOwn] = [await tableAt(craft, '2026-12-01T15:00:00Z'), await tableAt(own, '2026-12-01T15:20:00Z')]
    await wake('2026-12-01T14:20:00Z')
    expect(await states(others, itsOwn)).toEqual(['published', 'approved'])
    await wake('2026-12-01T14:50:00Z')
    expect(await states(itsOwn)).toEqual(['published'])
  })

  it('has to be longer than the freeze, within which the schedule publishes nothing', async () => {
    expect(await refusalOf(give({ leadMinutes: 10 }))).toMatchObject({ code: 'not-valid', paths: ['leadMinutes'] })
    expect(await give({ leadMinutes: 11 })).toMatchObject({ publishAt: null, leadMinutes: 11 })
  })
})

describe('the preview of the coming slots', () => {
  it('says at which instants a week’s evenings fall, and what each would publish if it came now', async () => {
    await give({ publishAt: '20:30' })
    const link = await addLink(database.db, craft.id)
    await tableAt(craft, '2026-12-01T23:00:00Z')
    const drafted = await addTable(database.db, craft, station, await addPass(database.db, craft, station, new Date('2026-12-02T02:00:00Z')), { state: 'drafted', linkId: link.id })
    await tableAt(own, '2026-12-01T23:30:00Z')
    await tableAt(craft, '2026-12-02T01:00:00Z', { margin: 0.5, approvedBy: 'Ada' })
    await tableAt(craft, '2026-12-02T03:00:00Z', { state: 'held' })
    const preview = await previewSlots({ db: database.db, now: start }, { stationId: station.id, publishAt: '19:15', zone: 'Europe/Oslo' })
    expect(preview.evenings).toHaveLength(7)
    expect(preview.evenings[0]).toEqual({ kind: 'publish-night', entity: station.id, name: station.name, at: '2026-12-01T18:15:00.000Z', local: '2026-12-01 19:15 (UTC+01:00)', approved: 1, undecided: 2 })
    expect(preview.evenings.slice(1).every(({ approved, undecided }) => approved === 0 && undecided === 0)).toBe(true)
    const ofLink = await previewSlots({ db: database.db, now: start }, { stationId: station.id, linkId: own.link.id, publishAt: '21:00', leadMinutes: 45 })
    expect(ofLink.evenings[0]).toMatchObject({ at: '2026-12-01T21:00:00.000Z', approved: 1, undecided: 0 })
    expect(ofLink).toMatchObject({ leads: [{ at: '2026-12-01T22:45:00.000Z', approved: 0, undecided: 0 }], leadCount: 1 })
    // The same as it stands, in the list of slots, an hour before AOS for what waits.
    const { coming } = await listSlots({ db: database.db, now: start })
    expect(coming.find(({ entity }) => entity === `${station.id}:${own.link.id}`)).toMatchObject({ at: '2026-12-01T20:30:00.000Z', name: `${own.name}, ${own.link.name} at ${station.name}`, approved: 1, undecided: 0 })
    expect(coming.find(({ entity }) => entity === drafted.id)).toMatchObject({ at: '2026-12-02T01:00:00.000Z', approved: 0, undecided: 1 })
  })

  it('is what then happens: each slot that it names is done at its instant', async () => {
    const table = await tableAt(own, '2026-12-02T22:10:00Z')
    const preview = await previewSlots({ db: database.db, now: start }, { stationId: station.id, linkId: own.link.id, publishAt: '21:00' })
    await give({ publishAt: '21:00' })
    for (let ms = start.getTime(); ms < start.getTime() + 2 * day; ms += 30 * minute) await wakeAt(database.db, new Date(ms))
    const done = (await slotsOf(database.db, 'publish-night')).filter(({ entity }) => entity === `${station.id}:${own.link.id}`)
    expect(done.map(({ instant }) => instant.toISOString())).toEqual(preview.evenings.slice(0, 2).map(({ at }) => at))
    expect(done.map(({ outcome }) => outcome)).toEqual(['Nothing to publish, on time.', 'Published 1 table, on time.'])
    expect(await presentDigest(database.db, start, own, station)).toBe(table.revision.inputsDigest)
  })
})
