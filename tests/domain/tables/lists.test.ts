import { asc, eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { passOut, passSamplesOut, tableBrief, tableOut } from '#shared/schemas/tables'
import type { Database } from '~~/server/database/client'
import { openDatabase } from '~~/server/database/client'
import { passes, stations } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { approveTable } from '~~/server/domain/tables/approve-table'
import { getTable } from '~~/server/domain/tables/get-table'
import { getPass, listPasses } from '~~/server/domain/tables/list-passes'
import { listTables } from '~~/server/domain/tables/list-tables'
import { publishTable } from '~~/server/domain/tables/publish-table'
import { samplePass } from '~~/server/domain/tables/sample-pass'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import { referencePasses } from '../../support/reference-data'
import type { Fleet } from '../prediction/fleet'
import { createFleet, createPerson, referencePassesOf, windowStart } from '../prediction/fleet'

let test: TestDatabase
let database: Database
let fleet: Fleet
let operator: PersonActor
const now = windowStart

beforeAll(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  operator = await createPerson(database.db, 'Ada', ['operator'])
  fleet = await createFleet(database.db)
  await database.db.update(stations).set({ minElevationDeg: 0 }).where(eq(stations.id, fleet.stationId))
  await predictStation({ db: database.db, now }, { ...fleet, reason: 'A test asks.' })
})
afterAll(async () => {
  await database.close()
  await test.drop()
})

const deps = () => ({ db: database.db, now })
const reference = referencePassesOf('SSO500', 'N78', 0)

describe('lists of passes and tables', () => {
  it('pages through every pass once, by AOS', async () => {
    const seen: string[] = []
    let cursor: string | undefined
    do {
      const page = await listPasses(deps(), { limit: 7, cursor })
      for (const item of page.items) passOut.parse(item)
      seen.push(...page.items.map(({ aos }) => aos))
      cursor = page.nextCursor ?? undefined
    } while (cursor)
    // The independent program's passes, to the second (data/README.md).
    expect(seen.map(aos => Math.round(Date.parse(aos) / 1000))).toEqual(reference.map(pass => Math.round(now.getTime() / 1000 + pass.aosS)))
  })

  it('pages through every table once; those of one pass stand together', async () => {
    const first = await listTables(deps(), { limit: 5 })
    const second = await listTables(deps(), { limit: 1000, cursor: first.nextCursor! })
    const all = [...first.items, ...second.items]
    for (const item of all) tableBrief.parse(item)
    expect(new Set(all.map(({ id }) => id)).size).toBe(2 * reference.length)
    expect(all.map(({ aos }) => aos)).toEqual(all.map(({ aos }) => aos).sort())
    expect(second.nextCursor).toBeNull()
    await expect(listTables(deps(), { limit: 5, cursor: 'nonsense' })).rejects.toMatchObject({ code: 'not-valid' })
  })

  it('filters by state, verdict, time and station', async () => {
    expect((await listTables(deps(), { limit: 1000, state: 'approved' })).items.every(({ direction }) => direction === 'downlink')).toBe(true)
    expect((await listTables(deps(), { limit: 1000, verdict: 'breaks' })).items).toEqual([])
    expect((await listTables(deps(), { limit: 1000, stationId: fleet.spacecraftId })).items).toEqual([])
    const [first, second] = (await listPasses(deps(), { limit: 2 })).items
    const between = { from: first!.los, to: second!.aos }
    // A pass that ends at `from` is in, one that rises at `to` is not.
    expect((await listPasses(deps(), { limit: 10, ...between })).items.map(({ id }) => id)).toEqual([first!.id])
  })

  it('says when the schedule publishes, and what the station has while a newer revision waits', async () => {
    const [item] = (await listTables(deps(), { limit: 1, state: 'drafted' })).items
    // The evening of 30 November at 18:00 in Longyearbyen has gone by: an hour before AOS it is.
    expect(item!.publishesAt).toBe(new Date(Date.parse(item!.aos) - 3_600_000).toISOString())
    await approveTable({ ...deps(), actor: operator }, { id: item!.id })
    const published = await publishTable({ ...deps(), actor: operator }, { id: item!.id })
    expect(published).toMatchObject({ publishesAt: null, out: null, state: 'published' })
  })

  it('answers a table whole', async () => {
    const [item] = (await listTables(deps(), { limit: 1 })).items
    const table = tableOut.parse(await getTable(deps(), item!.id))
    expect(table.retunes).toHaveLength(item!.retuneCount)
    expect(table.elementSet.epoch).toMatch(/\.\d{6}Z$/)
    await expect(getTable(deps(), fleet.stationId)).rejects.toMatchObject({ code: 'not-found' })
  })
})

describe('the curves of a pass', () => {
  it('are those that an independent program sees', async () => {
    const withSamples = referencePasses().passes.find(pass => pass.satellite === 'SSO500' && pass.station === 'N78' && pass.samples && !pass.aosClipped)!
    const [row] = await database.db.select().from(passes).where(eq(passes.spacecraftId, fleet.spacecraftId)).orderBy(asc(passes.aos)).limit(1)
    const curves = passSamplesOut.parse(await samplePass(deps(), { id: row!.id, stepS: 0.5 }))
    const { startS, stepS, elevationDeg } = withSamples.samples!
    const elevationAt = (ms: number) => {
      const i = curves.samples.findIndex(sample => Date.parse(sample.at) >= ms)
      const [a, b] = [curves.samples[i - 1]!, curves.samples[i]!]
      const share = (ms - Date.parse(a.at)) / (Date.parse(b.at) - Date.parse(a.at))
      return a.elevationDeg * (1 - share) + b.elevationDeg * share
    }
    let compared = 0
    elevationDeg.forEach((expected, k) => {
      const ms = now.getTime() + (startS + k * stepS) * 1000
      if (ms <= Date.parse(curves.samples[0]!.at) || ms >= Date.parse(curves.samples.at(-1)!.at)) return
      expect(Math.abs(elevationAt(ms) - expected)).toBeLessThan(0.001)
      compared++
    })
    expect(compared).toBeGreaterThan(10)
    expect(curves.links.map(link => link.tableId).every(id => id !== null)).toBe(true)
    // Falling on the downlink, rising on the uplink, by less than v/c of the carrier (mechanics).
    const down = curves.links.find(link => link.linkId === fleet.downlinkId)!
    const up = curves.links.find(link => link.linkId === fleet.uplinkId)!
    expect(down.dopplerHz[0]).toBeGreaterThan(down.dopplerHz.at(-1)!)
    expect(up.dopplerHz[0]).toBeLessThan(up.dopplerHz.at(-1)!)
    expect(down.dopplerRateHzPerS.every(rate => rate < 0)).toBe(true)
    expect(down.uncertaintyHz.every(hz => hz > 0 && hz < 1785)).toBe(true)
  })

  it('answer a pass by its address, and ask for a longer step where a pass is very long', async () => {
    const [item] = (await listPasses(deps(), { limit: 1 })).items
    expect(await getPass(deps(), item!.id)).toEqual(item)
    await expect(getPass(deps(), fleet.stationId)).rejects.toMatchObject({ code: 'not-found' })
    await database.db.update(passes).set({ los: new Date(Date.parse(item!.aos) + 3 * 3_600_000) }).where(eq(passes.id, item!.id))
    await expect(samplePass(deps(), { id: item!.id, stepS: 0.1 })).rejects.toMatchObject({ code: 'not-valid' })
  })
})
