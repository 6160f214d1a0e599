import { and, asc, eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import type { StoredRetune } from '~~/server/database/schema'
import { audit, passes, radios, tableRevisions, tables } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { cancelQuietSpan } from '~~/server/domain/quiet-spans/cancel-quiet-span'
import { enterQuietSpan } from '~~/server/domain/quiet-spans/enter-quiet-span'
import { listQuietSpans } from '~~/server/domain/quiet-spans/list-quiet-spans'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { publishTable } from '~~/server/domain/tables/publish-table'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'
import type { Fleet } from '../prediction/fleet'
import { createFleet, createPerson, windowStart as now } from '../prediction/fleet'

const database = useTestDatabase()
let fleet: Fleet
let operator: PersonActor
let latencyMs: number
beforeEach(async () => {
  fleet = await createFleet(database.db)
  operator = await createPerson(database.db, 'Olav', ['operator'])
  latencyMs = (await database.db.select().from(radios).where(eq(radios.id, fleet.radioId)))[0]!.latencyMs
  await emptyQueue(database.db)
})
const deps = () => ({ db: database.db, actor: operator, now })
const predict = () => predictStation({ db: database.db, now }, { ...fleet, reason: 'A test asks.' })
const nobody = { stationId: null, spacecraftId: null, linkId: null }
type Names = { [K in keyof typeof nobody]?: string }
const enter = (fromMs: number, toMs: number, names: Names) => enterQuietSpan(deps(), { ...nobody, ...names, startsAt: new Date(fromMs).toISOString(), endsAt: new Date(toMs).toISOString(), reason: 'Ranging on the other band' })

/** Newest revisions of a link's tables, by AOS. */
async function revisionsOf(linkId: string) {
  const rows = await database.db.select({ revision: tableRevisions, pass: passes }).from(tableRevisions).innerJoin(tables, eq(tables.id, tableRevisions.tableId)).innerJoin(passes, eq(passes.id, tables.passId))
    .where(and(eq(passes.stationId, fleet.stationId), eq(tables.linkId, linkId))).orderBy(asc(passes.aos), asc(tableRevisions.number))
  return rows
}
/** The highest pass that waits, with a span over the middle of it that holds several of its retunes. */
async function middleOf(linkId = fleet.downlinkId) {
  const row = (await revisionsOf(linkId)).reduce((most, next) => next.pass.maxElevationDeg > most.pass.maxElevationDeg ? next : most)
  const middleMs = row.pass.culmination.getTime()
  return { ...row, fromMs: middleMs - 4000, toMs: middleMs + 4000 }
}
const inside = (retunes: readonly StoredRetune[], fromMs: number, toMs: number) => retunes.filter(({ at }) => Date.parse(at) + latencyMs >= fromMs && Date.parse(at) + latencyMs <= toMs)

describe('a quiet span', () => {
  it('has no retune in it once its tables are computed anew, of the links and passes it names and of no others; cancelled, the tables are as before', async () => {
    await predict()
    const [before, uplinkBefore] = [await revisionsOf(fleet.downlinkId), await revisionsOf(fleet.uplinkId)]
    const { pass, revision, fromMs, toMs } = await middleOf()
    expect(inside(revision.retunes, fromMs, toMs).length).toBeGreaterThan(0)
    const span = await enter(fromMs, toMs, { stationId: fleet.stationId, linkId: fleet.downlinkId })
    await predict()
    const quiet = await revisionsOf(fleet.downlinkId)
    const changed = quiet.find(row => row.pass.id === pass.id)!.revision
    expect(inside(changed.retunes, fromMs, toMs)).toEqual([])
    expect(changed.check.faults).toEqual([])
    expect([changed.number, changed.state]).toEqual([1, 'approved'])
    const others = (rows: typeof before) => rows.filter(row => row.pass.id !== pass.id).map(row => row.revision)
    expect(others(quiet)).toEqual(others(before))
    expect((await revisionsOf(fleet.uplinkId)).map(row => row.revision)).toEqual(uplinkBefore.map(row => row.revision))
    await cancelQuietSpan(deps(), { id: span.id })
    await predict()
    expect((await revisionsOf(fleet.downlinkId)).map(row => row.revision.retunes)).toEqual(before.map(row => row.revision.retunes))
  })

  it('over AOS has the first row take effect before it, however long before', async () => {
    await predict()
    const { pass } = await middleOf()
    const [fromMs, toMs] = [pass.aos.getTime() - 900_000, pass.aos.getTime() + 5000]
    await enter(fromMs, toMs, { spacecraftId: fleet.spacecraftId })
    await predict()
    for (const linkId of [fleet.downlinkId, fleet.uplinkId]) {
      const { retunes, check } = (await revisionsOf(linkId)).find(row => row.pass.id === pass.id)!.revision
      expect(inside(retunes, fromMs, toMs)).toEqual([])
      expect(Date.parse(retunes[0]!.at) + latencyMs).toBeLessThan(fromMs)
      expect(check.faults).toEqual([])
    }
  })

  it('finds published rows in it to break, drafts a revision around it that says so, and the published one stays', async () => {
    await predict()
    const { pass, revision, fromMs, toMs } = await middleOf()
    await publishTable(deps(), { id: revision.tableId })
    await enter(fromMs, toMs, { stationId: fleet.stationId })
    await predict()
    const [first, second, ...more] = (await revisionsOf(fleet.downlinkId)).filter(row => row.pass.id === pass.id).map(row => row.revision)
    expect(more).toEqual([])
    expect([first!.state, first!.retunes]).toEqual(['published', revision.retunes])
    expect(second).toMatchObject({ number: 2, reason: expect.stringMatching(/^holds → breaks, moves by /) })
    expect(inside(second!.retunes, fromMs, toMs)).toEqual([])
  })

  it('entered after the last computation keeps a table from being published until it is computed anew', async () => {
    await predict()
    const { revision, fromMs, toMs } = await middleOf()
    await enter(fromMs, toMs, { stationId: fleet.stationId })
    expect(await refusalOf(publishTable(deps(), { id: revision.tableId }))).toMatchObject({ code: 'conflict', message: expect.stringMatching(/computed anew/) })
    await predict()
    expect(await publishTable(deps(), { id: revision.tableId })).toMatchObject({ state: 'published' })
  })

  it('asks for the predictions of what it names, and no others', async () => {
    const other = await createFleet(database.db)
    const hourMs = 3600_000
    const asked = async (names: Names) => {
      await emptyQueue(database.db)
      await enter(now.getTime() + hourMs, now.getTime() + 2 * hourMs, names)
      return (await queuedJobs(database.db, 'predict')).map(({ spacecraftId, stationId }) => `${spacecraftId} ${stationId}`)
    }
    expect(await asked({ stationId: fleet.stationId, linkId: fleet.uplinkId })).toEqual([`${fleet.spacecraftId} ${fleet.stationId}`])
    const atStation = await asked({ stationId: fleet.stationId })
    expect(atStation).toContain(`${other.spacecraftId} ${fleet.stationId}`)
    expect(atStation.every(pair => pair.endsWith(fleet.stationId))).toBe(true)
    const ofCraft = await asked({ spacecraftId: other.spacecraftId })
    expect(ofCraft).toContain(`${other.spacecraftId} ${fleet.stationId}`)
    expect(ofCraft.every(pair => pair.startsWith(other.spacecraftId))).toBe(true)
  })

  it('is refused when it is over or names a link of another spacecraft, and cancelled once', async () => {
    const other = await createFleet(database.db)
    expect(await refusalOf(enter(now.getTime() - 2000, now.getTime(), { stationId: fleet.stationId }))).toMatchObject({ code: 'not-valid', paths: ['endsAt'] })
    expect(await refusalOf(enter(now.getTime(), now.getTime() + 1000, { spacecraftId: fleet.spacecraftId, linkId: other.downlinkId }))).toMatchObject({ code: 'not-valid', paths: ['linkId'] })
    const span = await enter(now.getTime(), now.getTime() + 1000, { stationId: fleet.stationId })
    expect(await cancelQuietSpan(deps(), { id: span.id, reason: 'Ranging is off' })).toMatchObject({ cancelledBy: operator.name, cancelledAt: now.toISOString() })
    expect(await refusalOf(cancelQuietSpan(deps(), { id: span.id }))).toMatchObject({ code: 'conflict' })
    const past = await enter(now.getTime(), now.getTime() + 1000, { stationId: fleet.stationId })
    expect(await refusalOf(cancelQuietSpan({ ...deps(), now: new Date(now.getTime() + 1000) }, { id: past.id }))).toMatchObject({ code: 'conflict' })
    const trail = await database.db.select({ action: audit.action, by: audit.actorName, reason: audit.reason }).from(audit).where(eq(audit.entityId, span.id)).orderBy(asc(audit.id))
    expect(trail).toEqual([{ action: 'quiet-span.enter', by: operator.name, reason: 'Ranging on the other band' }, { action: 'quiet-span.cancel', by: operator.name, reason: 'Ranging is off' }])
  })

  it('is listed for whatever it concerns, the latest first, page by page', async () => {
    const other = await createFleet(database.db)
    const at = now.getTime()
    const ofStation = await enter(at + 1000, at + 9000, { stationId: fleet.stationId })
    const ofCraft = await enter(at + 2000, at + 9000, { spacecraftId: fleet.spacecraftId })
    const ofLink = await enter(at + 3000, at + 9000, { linkId: fleet.downlinkId, stationId: fleet.stationId })
    await enter(at + 4000, at + 9000, { linkId: other.downlinkId, stationId: other.stationId })
    const list = async (query: object) => (await listQuietSpans({ db: database.db }, { limit: 100, ...query })).items.map(({ id }) => id)
    expect(await list({ stationId: fleet.stationId, spacecraftId: fleet.spacecraftId })).toEqual([ofLink.id, ofCraft.id, ofStation.id])
    expect(await list({ stationId: fleet.stationId, linkId: fleet.uplinkId })).toEqual([ofCraft.id, ofStation.id])
    expect(await list({ stationId: other.stationId, linkId: fleet.downlinkId })).toEqual([ofCraft.id])
    expect(await list({ stationId: fleet.stationId, spacecraftId: fleet.spacecraftId, to: new Date(at + 2000).toISOString() })).toEqual([ofStation.id])
    const first = await listQuietSpans({ db: database.db }, { limit: 2, stationId: fleet.stationId, spacecraftId: fleet.spacecraftId })
    expect((await listQuietSpans({ db: database.db }, { limit: 2, stationId: fleet.stationId, spacecraftId: fleet.spacecraftId, cursor: first.nextCursor! })).items.map(({ id }) => id)).toEqual([ofStation.id])
    expect(ofLink).toMatchObject({ linkName: 'Telemetry', spacecraftName: expect.stringMatching(/^Dunlin/), stationName: expect.stringMatching(/^Holm/) })
  })
})
