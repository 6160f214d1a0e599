import { eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import type { Database } from '../../../server/database/client'
import { openDatabase } from '../../../server/database/client'
import { alerts, antennas, mails, tableRevisions } from '../../../server/database/schema'
import { acknowledgeAlert } from '../../../server/domain/alerts/acknowledge-alert'
import { afterPrediction } from '../../../server/domain/alerts/after-prediction'
import { closeAlert } from '../../../server/domain/alerts/close-alert'
import { listAlerts } from '../../../server/domain/alerts/read-alerts'
import { reconcileAlerts } from '../../../server/domain/alerts/reconcile-alerts'
import type { PersonActor } from '../../../server/domain/context'
import { scheduleActor, systemActor } from '../../../server/domain/context'
import { DomainError } from '../../../server/domain/errors'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addActor, addPass, addPerson, addRevision, addSpacecraft, addStation, addTable, checkOf } from '../../support/fixtures'

// What alerts are for, whom they reach and when they close: common practice of alarm handling (one alarm a cause, hysteresis).
let test: TestDatabase
let database: Database
let now: Date
let craft: SpacecraftFixture
let station: StationFixture
let people: Record<'operator' | 'onCall' | 'admin' | 'flight', PersonActor>
const minutes = (count: number) => count * 60_000
const after = (ms: number) => new Date(now.getTime() + ms)

beforeEach(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  now = new Date('2026-12-01T12:00:00.000Z')
  craft = await addSpacecraft(database.db, after(-minutes(120)), { name: 'Gannet' }, { name: 'Beacon' })
  station = await addStation(database.db, { name: 'North Cove' })
  people = {
    operator: await addActor(database.db, ['operator'], { name: 'Op' }),
    onCall: await addActor(database.db, ['on-call'], { name: 'Ona' }),
    admin: await addActor(database.db, ['administrator'], { name: 'Ad' }),
    flight: await addActor(database.db, ['flight-dynamics'], { name: 'Fly' }),
  }
  await addPerson(database.db, ['on-call'], { name: 'Gone', disabledAt: now })
  return async () => {
    await database.close()
    await test.drop()
  }
})

const reconcile = () => reconcileAlerts({ db: database.db, now, actor: scheduleActor })
const standing = async () => (await listAlerts({ db: database.db }, { state: 'standing', limit: 100 })).items
const mailed = async () => (await database.db.select().from(mails).orderBy(mails.createdAt)).map(mail => mail.toName)
const setMargin = (tableId: string, margin: number) => database.db.update(tableRevisions).set({ check: checkOf(margin, now), verdict: margin < 1 ? 'breaks' : 'tight' }).where(eq(tableRevisions.tableId, tableId))
const tableAt = async (ms: number, given: Parameters<typeof addTable>[4] = {}) => addTable(database.db, craft, station, await addPass(database.db, craft, station, after(ms)), given)
const as = (actor: PersonActor) => ({ db: database.db, now, actor })

describe('a residual beyond its allowance', () => {
  it('raises one alert and one mail to each on-call engineer for forty tables of one link', async () => {
    for (let index = 0; index < 40; index++) await tableAt(minutes(70 + 60 * index), { margin: index === 7 ? 0.4 : 0.8 })
    await reconcile()
    await reconcile()
    const [alert, ...others] = await standing()
    expect(others).toEqual([])
    expect(alert).toMatchObject({ kind: 'residual-ahead', severity: 'call', state: 'open', count: 40, spacecraftName: 'Gannet', dueAt: after(minutes(70)).toISOString() })
    expect(alert!.detail).toMatch(/40 tables .* AOS 2026-12-01 13:10:00 UTC.*2\u202F500 Hz.* 1\u202F000 Hz/)
    expect(await mailed()).toEqual(['Ona'])
    expect(alert!.mails).toEqual([{ to: 'Ona', state: 'queued', attempts: 0, lastError: null, sentAt: null }])
  })

  it('speaks of the tables that break, not of those that are only tight', async () => {
    await tableAt(minutes(70), { margin: 1.02 })
    const other = await addStation(database.db)
    await addTable(database.db, craft, other, await addPass(database.db, craft, other, after(minutes(80))), { margin: 1.04 })
    const breaking = await tableAt(minutes(300), { margin: 0.8 })
    await tableAt(minutes(360), { margin: 0.5 })
    await reconcile()
    const [alert] = await standing()
    expect(alert).toMatchObject({ count: 2, tableId: breaking.id, dueAt: after(minutes(300)).toISOString() })
    expect(alert!.detail).toMatch(/^2 tables .* at one station break, the first with AOS 2026-12-01 17:00:00 UTC.* 2\u202F000 Hz/)
    expect((await database.db.select().from(mails))[0]!.text).toContain('2026-12-01 17:00:00 UTC')
  })

  it('leaves alone what is held, further than two days ahead, or over', async () => {
    await tableAt(minutes(70), { margin: 0.5, state: 'held' })
    await tableAt(minutes(49 * 60), { margin: 0.5 })
    await tableAt(-minutes(5), { margin: 0.5 })
    await reconcile()
    expect((await standing()).filter(({ kind }) => kind === 'residual-ahead')).toEqual([])
  })

  it('opens below margin 1 only, and closes at 1.05 only', async () => {
    const table = await tableAt(minutes(300), { margin: 1.01 })
    await reconcile()
    expect(await standing()).toEqual([])
    await setMargin(table.id, 0.99)
    await reconcile()
    await setMargin(table.id, 1.03)
    await reconcile()
    expect(await standing()).toHaveLength(1)
    await setMargin(table.id, 1.06)
    await reconcile()
    expect(await standing()).toEqual([])
    const [closed] = (await listAlerts({ db: database.db }, { state: 'closed', limit: 10 })).items
    expect(closed).toMatchObject({ closedBy: 'Schedule', closeReason: 'The cause is gone.' })
  })

  it('mails nobody a second time when it comes back within half an hour, and says so; later it does', async () => {
    const table = await tableAt(minutes(600), { margin: 0.9 })
    for (const [pause, margin] of [[0, 0.9], [1, 2], [29, 0.9]] as const) {
      now = after(minutes(pause))
      await setMargin(table.id, margin)
      await reconcile()
    }
    await reconcile()
    expect((await standing())[0]!.detail).toContain('no second mail was sent')
    expect(await mailed()).toEqual(['Ona'])
    for (const [pause, margin] of [[1, 2], [31, 0.9]] as const) {
      now = after(minutes(pause))
      await setMargin(table.id, margin)
      await reconcile()
    }
    expect(await mailed()).toEqual(['Ona', 'Ona'])
  })

  it('is one alert when two servers look at once', async () => {
    await tableAt(minutes(300), { margin: 0.5 })
    await Promise.all([reconcile(), reconcile(), reconcile(), reconcile()])
    expect(await standing()).toHaveLength(1)
    expect(await mailed()).toEqual(['Ona'])
  })
})

describe('a decision that is due', () => {
  it('tells the operators an hour before AOS, and calls on-call at a quarter of an hour although somebody acknowledged', async () => {
    await tableAt(minutes(61))
    await reconcile()
    expect(await standing()).toEqual([])
    now = after(minutes(1))
    await reconcile()
    const [notice] = await standing()
    expect(notice).toMatchObject({ kind: 'decision-due', severity: 'notice' })
    expect(await mailed()).toEqual(['Op'])
    await acknowledgeAlert(as(people.operator), notice!.id)
    now = after(minutes(45))
    await reconcile()
    await reconcile()
    expect(await standing()).toMatchObject([{ id: notice!.id, severity: 'call', state: 'open', acknowledgedBy: null }])
    expect(await mailed()).toEqual(['Op', 'Ona'])
    now = after(minutes(16))
    await reconcile()
    expect(await standing()).toEqual([])
  })

  it('counts what is approved after its last slot, or lacks its second person, and not what its slot will publish', async () => {
    const late = await addStation(database.db, { publishLeadMinutes: 20 })
    const pass = async () => addPass(database.db, craft, late, after(minutes(40)))
    await addTable(database.db, craft, late, await pass(), { state: 'approved' })
    await reconcile()
    expect(await standing()).toEqual([])
    const breaking = await addTable(database.db, craft, late, await pass(), { state: 'approved', margin: 0.5 })
    const missed = await tableAt(minutes(40), { state: 'approved' })
    await reconcile()
    expect((await standing()).filter(({ kind }) => kind === 'decision-due').map(({ tableId }) => tableId).sort()).toEqual([breaking.id, missed.id].sort())
  })
})

describe('other causes', () => {
  it('raise one alert for a station that fetches nothing, from ten minutes before AOS until it does', async () => {
    // Short ones, that the antenna can follow one after the other.
    await database.db.update(antennas).set({ setupS: 0 })
    const short = (ms: number) => ({ check: { ...checkOf(5, after(ms)), workable: [{ from: after(ms).toISOString(), to: after(ms + 20_000).toISOString() }] } })
    const table = await tableAt(minutes(11), { state: 'published', ...short(minutes(11)) })
    await tableAt(minutes(10) + 30_000, { state: 'published', ...short(minutes(10) + 30_000) })
    await tableAt(minutes(9), { state: 'collected', ...short(minutes(9)) })
    await reconcile()
    expect(await standing()).toEqual([])
    now = after(minutes(1))
    await reconcile()
    expect(await standing()).toMatchObject([{ kind: 'not-collected', severity: 'call', count: 2, stationName: 'North Cove' }])
    await database.db.update(tableRevisions).set({ state: 'collected', collectedAt: now })
    await reconcile()
    expect(await standing()).toEqual([])
    expect(table.revision.state).toBe('published')
  })

  it('tell flight dynamics and on-call of elements past the spacecraft’s limit', async () => {
    now = after(minutes(70 * 60) - 1)
    await reconcile()
    expect(await standing()).toEqual([])
    now = after(2)
    await reconcile()
    expect(await standing()).toMatchObject([{ kind: 'elements-old', severity: 'notice', spacecraftName: 'Gannet' }])
    expect((await mailed()).sort()).toEqual(['Fly', 'Ona'])
  })

  it('come with the prediction that shows a published table to break, and close when its newer revision is out', async () => {
    const table = await tableAt(minutes(300), { state: 'published' })
    const newer = await addRevision(database.db, craft, station, { tableId: table.id, aos: after(minutes(300)), number: 2 })
    const recheck = { tableId: table.id, passId: table.passId, linkId: craft.link.id, revision: 1, verdict: 'breaks' as const, worstResidualHz: 1400, allowanceHz: 1000, gone: null }
    const outcome = { spacecraftId: craft.id, stationId: station.id, reason: 'a new element set', passes: { added: 0, changed: 1, gone: 0 }, revisions: { drafted: 1, recomputed: 0, lapsed: 0 }, rechecks: [recheck, { ...recheck, verdict: 'holds' as const }] }
    await database.db.transaction(tx => afterPrediction({ db: tx, now, actor: systemActor }, outcome))
    expect(await standing()).toMatchObject([{ kind: 'published-table-breaks', severity: 'call', count: 1, detail: expect.stringMatching(/Beacon, 1\u202F400 Hz.* 1\u202F000 Hz/) }])
    expect(await mailed()).toEqual(['Ona'])
    await reconcile()
    expect(await standing()).toMatchObject([{ kind: 'published-table-breaks', detail: expect.stringContaining('Beacon') }])
    await database.db.delete(tableRevisions).where(eq(tableRevisions.id, newer.id))
    await reconcile()
    expect(await standing()).toEqual([])
  })

  it('do not take what went out although it broke for news', async () => {
    const table = await tableAt(minutes(300), { state: 'published', margin: 0.9 })
    const recheck = { tableId: table.id, passId: table.passId, linkId: craft.link.id, revision: 1, verdict: 'breaks' as const, worstResidualHz: 1400, allowanceHz: 1000, gone: null }
    await database.db.transaction(tx => afterPrediction({ db: tx, now, actor: systemActor }, { spacecraftId: craft.id, stationId: station.id, reason: 'x', passes: { added: 0, changed: 0, gone: 0 }, revisions: { drafted: 0, recomputed: 0, lapsed: 0 }, rechecks: [recheck] }))
    expect((await standing()).map(({ kind }) => kind)).toEqual(['residual-ahead'])
  })
})

describe('acting on an alert', () => {
  const refusal = async (act: Promise<unknown>) => act.then(() => 'allowed', (error: unknown) => error instanceof DomainError ? error.code : String(error))

  it('is for on-call and administrators; operators act on decisions that are due', async () => {
    await tableAt(minutes(300), { margin: 0.5 })
    await tableAt(minutes(50))
    await reconcile()
    const list = await standing()
    const [residual, decision] = [list.find(({ kind }) => kind === 'residual-ahead')!, list.find(({ kind }) => kind === 'decision-due')!]
    expect(await refusal(acknowledgeAlert(as(people.operator), residual.id))).toBe('not-allowed')
    expect(await refusal(acknowledgeAlert(as(people.flight), decision.id))).toBe('not-allowed')
    expect(await acknowledgeAlert(as(people.operator), decision.id)).toMatchObject({ state: 'acknowledged', acknowledgedBy: 'Op' })
    expect(await acknowledgeAlert(as(people.admin), residual.id)).toMatchObject({ acknowledgedBy: 'Ad' })
    expect(await acknowledgeAlert(as(people.onCall), residual.id)).toMatchObject({ acknowledgedBy: 'Ad' })
    expect(await refusal(closeAlert(as(people.operator), { alertId: decision.id, reason: 'later' }))).toBe('not-allowed')
    expect(await closeAlert(as(people.onCall), { alertId: residual.id })).toMatchObject({ state: 'closed', closedBy: 'Ona', closeReason: 'Set aside while it stands.' })
  })

  it('keeps a cause that was set aside quiet until it is worse by a fifth', async () => {
    const table = await tableAt(minutes(600), { margin: 0.9 })
    await reconcile()
    await closeAlert(as(people.onCall), { alertId: (await standing())[0]!.id, reason: 'Known, a test beacon.' })
    await reconcile()
    await setMargin(table.id, 0.76)
    await reconcile()
    expect(await standing()).toEqual([])
    await setMargin(table.id, 0.74)
    await reconcile()
    expect(await standing()).toHaveLength(1)
    expect(await mailed()).toEqual(['Ona', 'Ona'])
  })

  it('lets a cause that was set aside call again once it has been gone', async () => {
    const table = await tableAt(minutes(600), { margin: 0.9 })
    await reconcile()
    await closeAlert(as(people.onCall), { alertId: (await standing())[0]!.id, reason: 'Known, a test beacon.' })
    for (const margin of [0.9, 2, 0.9]) {
      await setMargin(table.id, margin)
      await reconcile()
    }
    expect(await standing()).toHaveLength(1)
  })

  it('needs no reason when the cause has gone, and nothing is acknowledged that is closed', async () => {
    const table = await tableAt(minutes(600), { margin: 0.9 })
    await reconcile()
    const [alert] = await standing()
    await setMargin(table.id, 2)
    expect(await closeAlert(as(people.onCall), { alertId: alert!.id })).toMatchObject({ state: 'closed', closedBy: 'Ona' })
    expect(await refusal(acknowledgeAlert(as(people.onCall), alert!.id))).toBe('conflict')
    expect(await refusal(closeAlert(as(people.onCall), { alertId: alert!.id }))).toBe('conflict')
  })

  it('gives the list page by page, newest first', async () => {
    for (let index = 0; index < 5; index++) await database.db.insert(alerts).values({ kind: 'elements-old', cause: `c${index}`, severity: 'notice', title: `T${index}`, detail: '', action: '', openedAt: after(index) })
    const first = await listAlerts({ db: database.db }, { limit: 3 })
    const second = await listAlerts({ db: database.db }, { limit: 3, cursor: first.nextCursor! })
    expect([...first.items, ...second.items].map(({ title }) => title)).toEqual(['T4', 'T3', 'T2', 'T1', 'T0'])
    expect(second.nextCursor).toBeNull()
  })
})
