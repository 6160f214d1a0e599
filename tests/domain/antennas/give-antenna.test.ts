import { and, asc, eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { alerts, antennaDecisions, audit, mails, passes, spacecraft, tableRevisions } from '../../../server/database/schema'
import type { PersonActor } from '../../../server/domain/context'
import { scheduleActor } from '../../../server/domain/context'
import { reconcileAlerts } from '../../../server/domain/alerts/reconcile-alerts'
import { listConflicts } from '../../../server/domain/antennas/find-conflicts'
import { giveAntenna } from '../../../server/domain/antennas/give-antenna'
import { approveTable } from '../../../server/domain/tables/approve-table'
import { holdTable, releaseTable } from '../../../server/domain/tables/hold-table'
import { publishTable } from '../../../server/domain/tables/publish-table'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addActor, addPass, addSpacecraft, addStation, addTable, presentDigest } from '../../support/fixtures'
import { slotsOf, stateOf, wakeAt } from '../schedule/support'

const database = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let operator: PersonActor
let station: StationFixture
let low: SpacecraftFixture
let high: SpacecraftFixture
beforeEach(async () => {
  operator = await addActor(database.db, ['operator'])
  station = await addStation(database.db, { createdAt: now })
  low = await addSpacecraft(database.db, now, { priority: 1 })
  high = await addSpacecraft(database.db, now, { priority: 5 })
})
const deps = () => ({ db: database.db, actor: operator, now })

/** A pass of ten minutes, with a table of these; the antenna needs two minutes before it. */
async function passWith(craft: SpacecraftFixture, aos: string, given: Parameters<typeof addTable>[4] = {}) {
  const pass = await addPass(database.db, craft, station, new Date(`2026-12-${aos}Z`))
  const table = await addTable(database.db, craft, station, pass, { state: 'approved', approvedBy: 'Rule: approve what holds', inputsDigest: await presentDigest(database.db, now, craft, station), ...given })
  return { pass, table, id: table.id, passId: pass.id }
}
const give = (to: { passId: string }, other: { passId: string }, reason?: string) => giveAntenna(deps(), { antennaId: station.antenna.id, passId: to.passId, otherPassId: other.passId, reason })
const conflicts = async () => (await listConflicts({ db: database.db, now }, { stationId: station.id })).items
const revisions = (table: { id: string }) => database.db.select().from(tableRevisions).where(eq(tableRevisions.tableId, table.id)).orderBy(asc(tableRevisions.number))
const states = (...tables: { id: string }[]) => Promise.all(tables.map(table => stateOf(database.db, table)))

describe('two passes that want one antenna', () => {
  it('are found where set-up time makes them meet, and not where there is time between', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:11:59')]
    const [found] = await conflicts()
    // Ten minutes of pass, then 119 s until the next: one second short of the two minutes of set-up.
    expect(found).toMatchObject({ antennaId: station.antenna.id, setupS: 120, defaultPassId: second.passId, given: null, passes: [{ passId: first.passId, priority: 1, busyFrom: '2026-12-01T19:58:00.000Z', busyTo: '2026-12-01T20:10:00.000Z' }, { passId: second.passId, busyFrom: '2026-12-01T20:09:59.000Z' }] })
    await database.db.update(passes).set({ goneAt: now }).where(eq(passes.id, second.passId))
    await passWith(high, '01T20:12:00')
    expect(await conflicts()).toEqual([])
  })

  it('are none where a table is held for another reason, or on another antenna', async () => {
    const [first] = [await passWith(low, '01T20:00:00', { state: 'drafted' }), await passWith(high, '01T20:05:00')]
    expect(await conflicts()).toHaveLength(1)
    await holdTable(deps(), { id: first.id, reason: 'Antenna under test' })
    expect(await conflicts()).toEqual([])
  })

  it('are decided by one action: the other’s tables stand down and say for whom, and given the other way all is as it was', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:05:00', { state: 'drafted', approvedBy: null, reason: 'Its verdict went from holds to tight' })]
    const [before] = [await revisions(first), await revisions(second)]
    expect((await give(first, second, 'Downlink of the week')).given).toMatchObject({ passId: first.passId, by: operator.name, reason: 'Downlink of the week', byDefault: false })
    expect((await revisions(second))[0]).toMatchObject({ state: 'held', standsDown: true, reason: `The antenna ${station.antenna.name} is given to ${low.name}: stands down (Downlink of the week).` })
    expect(await states(first)).toEqual(['approved'])
    await give(second, first)
    expect((await revisions(first))[0]).toMatchObject({ state: 'held', standsDown: true })
    expect((await revisions(second))[0]).toMatchObject({ state: 'drafted', standsDown: false, reason: 'Its verdict went from holds to tight', approvedBy: null })
    await give(first, second)
    const { updatedAt: _, ...restored } = (await revisions(first))[0]!
    expect(before[0]).toMatchObject({ ...restored })
    const trail = await database.db.select({ action: audit.action }).from(audit).where(eq(audit.tableId, first.id)).orderBy(asc(audit.id))
    expect(trail.map(({ action }) => action)).toEqual(['table.stand-down', 'table.stand-up'])
    expect(await database.db.select().from(antennaDecisions).where(eq(antennaDecisions.antennaId, station.antenna.id))).toHaveLength(1)
  })

  it('are decided with tables that are out withdrawn; given back they come again with the approval they had', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T21:00:00')]
    await publishTable(deps(), { id: first.id })
    await database.db.update(passes).set({ aos: new Date('2026-12-01T20:05:00Z') }).where(eq(passes.id, second.passId))
    await database.db.execute(`UPDATE table_revisions SET "check" = jsonb_set("check", '{workable}', '[{"from":"2026-12-01T20:05:00.000Z","to":"2026-12-01T20:15:00.000Z"}]') WHERE table_id = '${second.id}'`)
    await give(second, first)
    expect((await revisions(first))[0]).toMatchObject({ state: 'withdrawn', standsDown: true, reason: expect.stringMatching(/^The antenna Antenna is given to /) })
    await give(first, second)
    const [old, again] = await revisions(first)
    expect(old).toMatchObject({ state: 'withdrawn', standsDown: false })
    expect(again).toMatchObject({ number: 2, state: 'approved', approvedBy: 'Rule: approve what holds', retunes: old!.retunes, check: old!.check, canonical: null })
    expect(await publishTable(deps(), { id: first.id })).toMatchObject({ state: 'published', revision: 2 })
  })

  it('an approval comes back only as good as the verdict', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:05:00')]
    await give(second, first)
    await database.db.update(tableRevisions).set({ verdict: 'tight' }).where(eq(tableRevisions.tableId, first.id))
    await give(first, second)
    expect((await revisions(first))[0]).toMatchObject({ state: 'drafted', approvedBy: null, reason: 'Its verdict went from holds to tight while it stood down' })
  })

  it('released by hand stays without the antenna until that is given to it', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:05:00')]
    await give(second, first)
    await releaseTable(deps(), { id: first.id })
    await approveTable(deps(), { id: first.id })
    expect(await refusalOf(publishTable(deps(), { id: first.id }))).toMatchObject({ code: 'conflict', message: expect.stringMatching(/give the antenna to this pass first/) })
    await wakeAt(database.db, new Date('2026-12-01T18:00:00Z'))
    expect((await revisions(first))[0]).toMatchObject({ state: 'held', standsDown: true, reason: `Stands down for ${high.name}, which has ${station.antenna.name}.` })
  })

  it('refuses what is no conflict, is over, or has been given to it already', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:05:00')]
    const apart = await passWith(high, '01T22:00:00')
    expect(await refusalOf(give(first, apart))).toMatchObject({ code: 'conflict', message: expect.stringMatching(/do not want this antenna at one time/) })
    await give(first, second)
    expect(await refusalOf(give(first, second))).toMatchObject({ code: 'conflict' })
    expect(await refusalOf(giveAntenna({ ...deps(), now: new Date('2026-12-01T20:10:00Z') }, { antennaId: station.antenna.id, passId: second.passId, otherPassId: first.passId }))).toMatchObject({ code: 'conflict', message: expect.stringMatching(/over/) })
  })
})

describe('without a decision', () => {
  it('the schedule publishes the higher priority’s tables only; the other’s say for whom they stand down, and the slot too', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:05:00')]
    await wakeAt(database.db, new Date('2026-12-01T18:00:00Z'))
    expect(await states(first, second)).toEqual(['held', 'published'])
    expect((await revisions(first))[0]).toMatchObject({ standsDown: true, reason: `The antenna ${station.antenna.name} is given to ${high.name}, by priority: stands down.` })
    const [slot] = (await slotsOf(database.db, 'publish-night')).filter(({ entity }) => entity === station.id)
    expect(slot!.outcome).toBe(`Published 1 table; ${low.name}, ${low.link.name}: stands down for ${high.name}, which has ${station.antenna.name}, on time.`)
    expect((await conflicts())[0]!.given).toMatchObject({ passId: second.passId, by: 'Schedule', byDefault: true })
    // A person may still decide otherwise.
    await give(first, second)
    expect(await states(first, second)).toEqual(['approved', 'withdrawn'])
  })

  it('of three that want one antenna one is published, and the two others stand down for it', async () => {
    const middle = await addSpacecraft(database.db, now, { priority: 3 })
    const [a, b, c] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:05:00'), await passWith(middle, '01T20:08:00')]
    expect(await conflicts()).toHaveLength(3)
    await wakeAt(database.db, new Date('2026-12-01T18:00:00Z'))
    expect(await states(a, b, c)).toEqual(['held', 'published', 'held'])
    // Given to the lowest of them against the one that has it: the third now stands before it, by priority.
    await give(a, b)
    expect(await states(a, b, c)).toEqual(['approved', 'withdrawn', 'held'])
    await give(c, a)
    expect(await states(a, b, c)).toEqual(['held', 'withdrawn', 'held'])
    await give(c, b)
    expect(await states(a, b, c)).toEqual(['held', 'withdrawn', 'approved'])
  })

  it('of a chain of three the outer two are published when the middle one stands down', async () => {
    await database.db.update(spacecraft).set({ priority: 9 }).where(eq(spacecraft.id, low.id))
    const last = await addSpacecraft(database.db, now, { priority: 2 })
    const [a, b, c] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:08:00'), await passWith(last, '01T20:16:00')]
    await wakeAt(database.db, new Date('2026-12-01T18:00:00Z'))
    expect(await states(a, b, c)).toEqual(['published', 'held', 'published'])
  })

  it('what is out already keeps the antenna until a person gives it', async () => {
    const first = await passWith(low, '01T20:00:00')
    await publishTable(deps(), { id: first.id })
    const second = await passWith(high, '01T20:05:00')
    expect(await refusalOf(publishTable(deps(), { id: second.id }))).toMatchObject({ code: 'conflict', message: expect.stringMatching(/with tables that are out/) })
    await wakeAt(database.db, new Date('2026-12-01T18:00:00Z'))
    expect(await states(first, second)).toEqual(['published', 'approved'])
    await give(second, first)
    expect(await publishTable(deps(), { id: second.id })).toMatchObject({ state: 'published' })
  })

  it('raises one notice for operators, which a decision closes, and which seconds of difference do not flutter', async () => {
    const [first, second] = [await passWith(low, '01T20:00:00'), await passWith(high, '01T20:05:00')]
    const soon = new Date('2026-12-01T17:30:00.000Z')
    const reconcile = (at = soon) => reconcileAlerts({ db: database.db, now: at, actor: scheduleActor }, { kinds: ['antenna-conflict'] })
    const standing = () => database.db.select().from(alerts).where(and(eq(alerts.kind, 'antenna-conflict'), eq(alerts.stationId, station.id)))
    await reconcile(now)
    expect(await standing()).toEqual([])
    await reconcile(soon)
    await reconcile(soon)
    expect(await standing()).toMatchObject([{ severity: 'notice', state: 'open', dueAt: new Date('2026-12-01T20:00:00Z'), title: `${station.name}: ${low.name} and ${high.name} both want ${station.antenna.name}` }])
    const told = await database.db.select({ to: mails.toAddress }).from(mails).where(eq(mails.alertId, (await standing())[0]!.id))
    expect(told.map(({ to }) => to)).toContain(operator.email)
    const moveTo = (from: string) => database.db.execute(`UPDATE table_revisions SET "check" = jsonb_set("check", '{workable,0,from}', '"2026-12-01T${from}.000Z"') WHERE table_id = '${second.id}'`)
    await moveTo('20:12:20')
    await reconcile()
    expect(await standing()).toMatchObject([{ state: 'open' }])
    await moveTo('20:12:40')
    await reconcile()
    expect(await standing()).toMatchObject([{ state: 'closed' }])
    await moveTo('20:05:00')
    await reconcile(new Date(soon.getTime() + 3600_000))
    await give(first, second)
    await reconcile(new Date(soon.getTime() + 3601_000))
    expect((await standing()).map(({ state }) => state)).toEqual(['closed', 'closed'])
  })
})
