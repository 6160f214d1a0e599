import { asc, eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { alerts, mails } from '../../../server/database/schema'
import { reconcileAlerts } from '../../../server/domain/alerts/reconcile-alerts'
import { scheduleActor } from '../../../server/domain/context'
import type { Database } from '../../../server/database/client'
import { openDatabase } from '../../../server/database/client'
import { createTestDatabase } from '../../support/database'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addPerson, addSpacecraft, addStation } from '../../support/fixtures'
import { approvedTable, publications, slotsOf, stateOf, wakeAt } from './support'

let url: string
let database: Database
let craft: SpacecraftFixture
let station: StationFixture
const down = new Date('2026-12-01T17:00:00.000Z')
const up = new Date('2026-12-01T23:00:00.000Z')
beforeEach(async () => {
  const test = await createTestDatabase()
  url = test.url
  database = openDatabase(url)
  craft = await addSpacecraft(database.db, down)
  station = await addStation(database.db, { createdAt: new Date('2026-12-01T12:00:00.000Z') })
  return async () => {
    await database.close()
    await test.drop()
  }
})
const tableAt = (aos: string, given = {}) => approvedTable(database.db, { now: down, craft, station, aos: new Date(`2026-12-${aos}Z`), createdAt: new Date('2026-12-01T12:00:00.000Z'), ...given })
const states = (tables: { id: string }[]) => Promise.all(tables.map(table => stateOf(database.db, table)))
const missedAlerts = () => database.db.select().from(alerts).where(eq(alerts.kind, 'slots-missed')).orderBy(asc(alerts.openedAt))
const after = (seconds: number) => new Date(up.getTime() + 1000 * seconds)

describe('down for six hours, then started', () => {
  it('publishes the coming passes within a minute, records what was missed, and tells of all of it in one mail to each', async () => {
    const longHere = { createdAt: new Date('2026-11-01T00:00:00.000Z') }
    const people = [await addPerson(database.db, ['operator'], longHere), await addPerson(database.db, ['administrator'], longHere)]
    await addPerson(database.db, ['on-call'])
    await addPerson(database.db, ['reader'])
    const coming = [await tableAt('01T23:30:00'), await tableAt('02T02:00:00'), await tableAt('02T16:00:00')]
    const [over, waits] = [await tableAt('01T19:30:00'), await tableAt('01T21:00:00', { state: 'drafted' })]
    const frozen = await tableAt('01T23:05:00')
    await wakeAt(database.db, down)
    for (let seconds = 0; seconds <= 60; seconds += 5) await wakeAt(database.db, after(seconds))
    expect(await states(coming)).toEqual(['published', 'published', 'published'])
    expect(await states([over, waits, frozen])).toEqual(['lapsed', 'lapsed', 'approved'])
    expect((await slotsOf(database.db, 'publish-night')).map(({ outcome }) => outcome)).toEqual(['Published 2 tables, 5 h 0 min late.'])
    expect((await slotsOf(database.db, 'publish-lead')).map(({ entity, outcome }) => [entity, outcome])).toEqual([
      [over.id, 'Missed: found 4 h 30 min late, when the pass had begun; the table was approved.'],
      [waits.id, 'Missed: found 3 h 0 min late, when the pass had begun; the table was drafted.'],
      [frozen.id, 'Missed: found 55 min late, inside the last 10 minutes before AOS; the table was approved.'],
      [coming[0]!.id, 'Published 1 table, 30 min late.'],
    ])
    const told = await missedAlerts()
    expect(told).toMatchObject([{ severity: 'notice', count: 6, title: '6 slots of the schedule ran late or not at all', detail: expect.stringContaining('from 2026-12-01 17:00:00 UTC to 2026-12-01 23:00:00 UTC') }])
    expect(told[0]!.detail).toContain(`${station.name}, due 2026-12-01 18:00 UTC: Published 2 tables, 5 h 0 min late.`)
    const sent = await database.db.select({ to: mails.toAddress }).from(mails).where(eq(mails.alertId, told[0]!.id))
    expect(sent.map(({ to }) => to).sort()).toEqual(people.map(({ email }) => email).sort())
  })

  it('is told once by two servers that come back at once', async () => {
    await addPerson(database.db, ['operator'])
    for (const aos of ['01T23:30:00', '01T23:50:00', '02T00:10:00', '02T00:30:00', '02T00:50:00', '02T01:10:00']) await tableAt(aos)
    await wakeAt(database.db, down)
    const other = openDatabase(url)
    for (let seconds = 0; seconds <= 30; seconds += 5) await Promise.all([wakeAt(database.db, after(seconds)), wakeAt(other.db, after(seconds + 0.5))])
    await other.close()
    expect(await missedAlerts()).toHaveLength(1)
    expect((await database.db.select({ id: mails.id }).from(mails).innerJoin(alerts, eq(alerts.id, mails.alertId)).where(eq(alerts.kind, 'slots-missed')))).toHaveLength(1)
    expect(await publications(database.db)).toHaveLength(6)
  })

  it('goes by itself after a day, and a second outage is told anew', async () => {
    await tableAt('01T23:30:00')
    await wakeAt(database.db, down)
    for (const seconds of [0, 15]) await wakeAt(database.db, after(seconds), true)
    expect(await missedAlerts()).toMatchObject([{ state: 'open' }])
    const nextDay = new Date('2026-12-02T23:00:30.000Z')
    await wakeAt(database.db, nextDay)
    await wakeAt(database.db, new Date(nextDay.getTime() + 15_000))
    await reconcileAlerts({ db: database.db, now: new Date(nextDay.getTime() + 20_000), actor: scheduleActor })
    expect((await missedAlerts()).map(({ state, count }) => [state, count])).toEqual([['closed', 2], ['open', 1]])
  })

  it('tells nothing of an outage that missed nothing, nor of two minutes', async () => {
    await tableAt('02T02:00:00')
    await wakeAt(database.db, new Date('2026-12-01T13:00:00Z'))
    for (const time of ['15:00:00', '15:00:30', '17:59:00', '17:59:30', '18:01:20', '18:01:40']) await wakeAt(database.db, new Date(`2026-12-01T${time}Z`))
    expect(await missedAlerts()).toEqual([])
    expect((await slotsOf(database.db, 'publish-night'))).toHaveLength(1)
  })
})
