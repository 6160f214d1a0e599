import { asc, eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { audit, passes, tableRevisions, tables } from '~~/server/database/schema'
import { previewSet } from '~~/server/domain/elements/preview-set'
import { useElementSet } from '~~/server/domain/elements/use-element-set'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { publishTable } from '~~/server/domain/tables/publish-table'
import { useTestDatabase } from '../../support/domain-test'
import type { Fleet } from '../prediction/fleet'
import { addSet, ahead, createFleet, createPerson, referenceElements, windowStart } from '../prediction/fleet'

const test = useTestDatabase()
const now = windowStart
const deps = () => ({ db: test.db, now })
let fleet: Fleet
let published: string[]

/** A spacecraft with predicted tables, of which the first two downlinks are published. */
beforeEach(async () => {
  fleet = await createFleet(test.db)
  await predictStation(deps(), { ...fleet, reason: 'A test asks.' })
  const rows = await test.db.select({ id: tables.id, state: tableRevisions.state, revision: tableRevisions.number }).from(tables)
    .innerJoin(passes, eq(passes.id, tables.passId)).innerJoin(tableRevisions, eq(tableRevisions.tableId, tables.id))
    .where(eq(passes.spacecraftId, fleet.spacecraftId)).orderBy(asc(passes.aos), asc(tables.id))
  const operator = await createPerson(test.db, 'Operator', ['operator'])
  published = rows.filter(row => row.state === 'approved').slice(0, 2).map(row => row.id)
  for (const tableId of published) await publishTable({ ...deps(), actor: operator }, { id: tableId, revision: 1 })
})
const candidate = (seconds: number) => addSet(test.db, fleet.spacecraftId, ahead({ ...referenceElements('SSO500'), epochUtcUs: referenceElements('SSO500').epochUtcUs }, seconds))
const counts = async () => Promise.all([passes, tables, tableRevisions, audit].map(async table => (await test.db.select().from(table)).length))

describe('what putting a set into use would do to tables', () => {
  it('is nothing for a set that moves the spacecraft by a thousandth of a second, and writes nothing', async () => {
    const id = await candidate(0.001)
    const before = await counts()
    const preview = await previewSet(deps(), { id })
    expect(preview).toMatchObject({ asOf: 'before', drafts: [], looked: { published: 2, passesGone: 0 } })
    expect(preview.published).toHaveLength(2)
    expect(preview.published.every(table => !table.supersedes && table.movesByHz! < 2)).toBe(true)
    expect(await counts()).toEqual(before)
  })

  it('is what happens then: the same tables are drafted anew, and the same verdicts come', async () => {
    // Half a minute ahead is kilohertz on every pass: no published row fits.
    const id = await candidate(30)
    const preview = await previewSet(deps(), { id })
    expect(preview.published.map(table => table.tableId).sort()).toEqual([...published].sort())
    for (const table of preview.published) {
      expect(table).toMatchObject({ supersedes: true, verdictBefore: 'holds', verdictAfter: 'breaks', linkName: 'Telemetry', revision: 1 })
      expect(table.movesByHz).toBeGreaterThan(table.limitHz!)
      // A fifth of what 9600 Bd bear at 0.5 dB (physics: 0.185991/T).
      expect(table.limitHz).toBeCloseTo(0.2 * 0.185991 * 9600, 1)
    }
    await useElementSet({ ...deps(), actor: await createPerson(test.db, 'Flight', ['flight-dynamics']) }, { id })
    await predictStation(deps(), { ...fleet, reason: 'Elements put into use' })
    const anew = await test.db.select().from(tableRevisions).where(eq(tableRevisions.number, 2))
    expect(anew.map(row => row.tableId).sort()).toEqual([...published].sort())

    const after = await previewSet(deps(), { id })
    expect(after).toMatchObject({ asOf: 'after', drafts: [] })
    expect(after.published.map(table => table.tableId).sort()).toEqual([...published].sort())
    expect(after.published[0]!.reason).toMatch(/moves by .* Hz: Elements put into use/)
  })

  it('names tables whose pass would be gone', async () => {
    const id = await addSet(test.db, fleet.spacecraftId, { ...referenceElements('SSO500'), inclinationDeg: 5 })
    const preview = await previewSet(deps(), { id })
    expect(preview.published.map(table => [table.verdictAfter, table.gone])).toEqual([[null, 'The pass is no longer predicted.'], [null, 'The pass is no longer predicted.']])
    expect(preview.looked.passesGone).toBeGreaterThan(10)
    expect(preview.drafts.length).toBeGreaterThan(10)
  })
})
