import { and, asc, eq } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { may } from '#shared/permissions'
import type { Database } from '~~/server/database/client'
import { openDatabase } from '~~/server/database/client'
import { audit, links, passes, tableRevisions, tables } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { scheduleActor } from '~~/server/domain/context'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { approveTable } from '~~/server/domain/tables/approve-table'
import { getTable } from '~~/server/domain/tables/get-table'
import { holdTable, releaseTable } from '~~/server/domain/tables/hold-table'
import { lapseDue } from '~~/server/domain/tables/lapse-due'
import { publishRevision } from '~~/server/domain/tables/publish-revision'
import { publishTable } from '~~/server/domain/tables/publish-table'
import { withdrawTable } from '~~/server/domain/tables/withdraw-table'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import type { Fleet } from '../prediction/fleet'
import { createFleet, createPerson, windowStart } from '../prediction/fleet'

// What is expected here is the life of a table and the table of roles as the product's description has them.
let test: TestDatabase
let database: Database
let fleet: Fleet
let operator: PersonActor
let other: PersonActor
let onCall: PersonActor
const now = windowStart

beforeAll(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  operator = await createPerson(database.db, 'Ada', ['operator'])
  other = await createPerson(database.db, 'Bo', ['operator'])
  onCall = await createPerson(database.db, 'Cleo', ['on-call'])
})
afterAll(async () => {
  await database.close()
  await test.drop()
})
beforeEach(async () => {
  fleet = await createFleet(database.db)
  await predictStation({ db: database.db, now }, { ...fleet, reason: 'A test asks.' })
})

const by = (actor: PersonActor, at = now) => ({ db: database.db, actor, now: at })
const bySchedule = (at = now) => ({ db: database.db, actor: scheduleActor, now: at })
async function firstTable(linkId: string) {
  const [row] = await database.db.select({ id: tables.id, aos: passes.aos }).from(tables).innerJoin(passes, eq(passes.id, tables.passId))
    .where(and(eq(tables.linkId, linkId), eq(passes.spacecraftId, fleet.spacecraftId))).orderBy(asc(passes.aos)).limit(1)
  return row!
}
const before = (aos: Date, minutes: number) => new Date(aos.getTime() - minutes * 60_000)
const conflict = (text: RegExp) => expect.objectContaining({ code: 'conflict', message: expect.stringMatching(text) })
async function makeItBreak() {
  await database.db.update(links).set({ captureRangeHz: 10 }).where(eq(links.id, fleet.uplinkId))
  await predictStation({ db: database.db, now }, { ...fleet, reason: 'A stricter limit.' })
}

describe('decisions on a tuning table', () => {
  it('walks an uplink from drafted by approval to published, with a row of the trail for each step', async () => {
    const { id } = await firstTable(fleet.uplinkId)
    expect(await approveTable(by(operator), { id, revision: 1 })).toMatchObject({ state: 'approved', approvedBy: 'Ada', approvedById: operator.id })
    expect(await publishTable(by(operator), { id, revision: 1 })).toMatchObject({ state: 'published', revision: 1, publishedAt: now.toISOString() })
    const table = await getTable({ db: database.db, now }, id)
    expect(table.history.map(({ action, by, revision }) => [action, by, revision])).toEqual([['table.draft', 'Server', 1], ['table.approve', 'Ada', 1], ['table.publish', 'Ada', 1]])
    expect(table.k).toBeCloseTo(2, 4)
  })

  it('refuses what is out of turn and says what to do first', async () => {
    const { id, aos } = await firstTable(fleet.uplinkId)
    await expect(publishTable(by(operator), { id })).rejects.toEqual(conflict(/approve it first/))
    await expect(releaseTable(by(operator), { id })).rejects.toEqual(conflict(/not held/))
    await expect(withdrawTable(by(operator), { id, reason: 'Not wanted.' })).rejects.toEqual(conflict(/nothing of this table/))
    await expect(approveTable(by(operator), { id, revision: 2 })).rejects.toEqual(conflict(/has taken the place/))
    await expect(approveTable(by(operator, aos), { id })).rejects.toEqual(conflict(/pass began/))
    await approveTable(by(operator), { id })
    await expect(approveTable(by(other), { id })).rejects.toEqual(conflict(/cannot be approved/))
    await holdTable(by(operator), { id, reason: 'Antenna is being greased.' })
    await expect(holdTable(by(operator), { id, reason: 'Again.' })).rejects.toEqual(conflict(/cannot be held/))
    await expect(approveTable(by(operator), { id })).rejects.toEqual(conflict(/Release it first/))
    await expect(publishTable(by(operator), { id })).rejects.toEqual(conflict(/release and approve/))
    expect(await releaseTable(by(operator), { id })).toMatchObject({ state: 'drafted', approvedBy: null, reason: null })
    await approveTable(by(operator), { id })
    await publishTable(by(operator), { id })
    await expect(publishTable(by(operator), { id })).rejects.toEqual(conflict(/nothing of this table waits/))
    await expect(holdTable(by(operator), { id, reason: 'Too late.' })).rejects.toEqual(conflict(/Withdraw it instead/))
    await expect(publishTable(by(operator), { id, revision: 7 })).rejects.toEqual(conflict(/has taken the place/))
    expect(await withdrawTable(by(operator), { id, reason: 'Wrong antenna.' })).toMatchObject({ state: 'withdrawn', reason: 'Wrong antenna.' })
    await expect(withdrawTable(by(operator), { id, reason: 'Twice.' })).rejects.toEqual(conflict(/nothing of this table/))
  })

  it('lets a table that breaks out only with two different people behind it, the second of whom may be on call', async () => {
    await makeItBreak()
    const { id } = await firstTable(fleet.uplinkId)
    await expect(approveTable(by(onCall), { id })).rejects.toMatchObject({ code: 'not-allowed' })
    expect(may(onCall.roles, 'tables:second')).toBe(true)
    expect(await approveTable(by(operator), { id })).toMatchObject({ state: 'approved', verdict: 'breaks', secondedBy: null })
    await expect(publishTable(by(operator), { id })).rejects.toEqual(conflict(/second person/))
    expect(await publishRevision(bySchedule(), { tableId: id, mover: 'schedule' })).toMatchObject({ outcome: 'needs-second-person' })
    await expect(approveTable(by(operator), { id })).rejects.toEqual(conflict(/second person/))
    expect(await approveTable(by(onCall), { id })).toMatchObject({ approvedBy: 'Ada', secondedBy: 'Cleo' })
    await expect(approveTable(by(other), { id })).rejects.toEqual(conflict(/already/))
    expect(await publishTable(by(operator), { id })).toMatchObject({ state: 'published', verdict: 'breaks' })
  })

  it('inside the freeze time a person publishes and the schedule does not; after AOS nobody does', async () => {
    const { id, aos } = await firstTable(fleet.downlinkId)
    expect(await publishRevision(bySchedule(before(aos, 10)), { tableId: id, mover: 'schedule' })).toMatchObject({ outcome: 'frozen' })
    expect(await publishRevision(bySchedule(aos), { tableId: id, mover: 'schedule' })).toMatchObject({ outcome: 'begun' })
    await expect(publishTable(by(operator, aos), { id })).rejects.toEqual(conflict(/pass began/))
    expect(await publishTable(by(operator, before(aos, 10)), { id })).toMatchObject({ state: 'published' })
  })

  it('the schedule publishes just before the freeze time, and only what is approved', async () => {
    const down = await firstTable(fleet.downlinkId)
    const up = await firstTable(fleet.uplinkId)
    expect(await publishRevision(bySchedule(before(down.aos, 10.001)), { tableId: down.id, mover: 'schedule' })).toMatchObject({ outcome: 'published', revision: 1, supersedes: null })
    expect(await publishRevision(bySchedule(), { tableId: up.id, mover: 'schedule' })).toMatchObject({ outcome: 'not-approved' })
    const [row] = await database.db.select().from(tableRevisions).where(eq(tableRevisions.tableId, down.id))
    expect(row!.publishedBy).toBe('Schedule')
  })

  it('publishes nothing whose inputs have changed since it was made', async () => {
    const { id } = await firstTable(fleet.downlinkId)
    await database.db.update(links).set({ permittedLossDb: 0.4 }).where(eq(links.id, fleet.downlinkId))
    expect(await publishRevision(bySchedule(), { tableId: id, mover: 'schedule' })).toMatchObject({ outcome: 'stale' })
    await predictStation({ db: database.db, now }, { ...fleet, reason: 'A stricter limit.' })
    expect(await publishRevision(bySchedule(), { tableId: id, mover: 'schedule' })).toMatchObject({ outcome: 'published' })
  })

  it('what is not out when its pass begins lapses, and the trail says so', async () => {
    const { id, aos } = await firstTable(fleet.uplinkId)
    const published = await firstTable(fleet.downlinkId)
    await publishTable(by(operator), { id: published.id })
    expect((await lapseDue(bySchedule(before(aos, 1)))).filter(({ tableId }) => tableId === id)).toEqual([])
    const lapsed = await lapseDue(bySchedule(aos))
    expect(lapsed.filter(({ tableId }) => tableId === id)).toMatchObject([{ tableId: id, revision: 1 }])
    expect(lapsed.some(({ tableId }) => tableId === published.id)).toBe(false)
    const [row] = await database.db.select().from(audit).where(and(eq(audit.tableId, id), eq(audit.action, 'table.lapse')))
    expect(row).toMatchObject({ actorKind: 'schedule', before: { state: 'drafted' }, after: { state: 'lapsed', revision: 1 } })
    expect(await lapseDue(bySchedule(aos))).toEqual([])
  })
})
