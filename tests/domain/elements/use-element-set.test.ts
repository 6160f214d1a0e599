import { eq, sql } from 'drizzle-orm'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { spacecraft } from '~~/server/database/schema'
import type { Deps } from '~~/server/domain/context'
import { getElementSet, listElementSets } from '~~/server/domain/elements/read-element-sets'
import { refuseElementSet } from '~~/server/domain/elements/refuse-element-set'
import { useElementSet } from '~~/server/domain/elements/use-element-set'
import type { World } from './support'
import { addSpacecraft, addStation, openWorld, stateOf, trailOf, twoLines, upload } from './support'

let world: World
let deps: Deps
let spacecraftId: string
beforeEach(async () => {
  world = await openWorld()
  deps = world.deps
  spacecraftId = await addSpacecraft(deps)
  await addStation(deps)
})
afterEach(() => world.close())

const addSet = async (change: Parameters<typeof twoLines>[0] = {}) => (await upload(deps, twoLines(change))).sets[0]!.id
const inUse = async () => (await deps.db.select({ id: spacecraft.inUseSetId }).from(spacecraft).where(eq(spacecraft.id, spacecraftId)))[0]!.id
const jobs = async () => (await deps.db.execute<{ data: { spacecraftId: string, reason: string } }>(sql`SELECT data FROM pgboss.job WHERE name = 'predict' ORDER BY created_on`)).rows.map(row => row.data)

describe('putting a set into use', () => {
  it('makes it the one in use, the former past, asks for new predictions and leaves a trail', async () => {
    const [first, second] = [await addSet(), await addSet({ epoch: '26334.61234567' })]
    await useElementSet(deps, { id: first })
    expect(await inUse()).toBe(first)
    const used = await useElementSet(deps, { id: second })
    expect(used).toMatchObject({ state: 'in-use', decidedBy: 'Flight desk', decidedAt: deps.now.toISOString() })
    expect(await inUse()).toBe(second)
    expect(await stateOf(deps, first)).toBe('past')
    expect(await trailOf(deps, second)).toMatchObject([{ action: 'element-set.use', before: { state: 'waiting', inUseSetId: first }, after: { state: 'in-use', inUseSetId: second } }])
    expect(await jobs()).toMatchObject([{ spacecraftId, reason: expect.stringContaining('2026-11-30T14:41Z') }])
  })

  it('rolls back to a past set', async () => {
    const [first, second] = [await addSet(), await addSet({ epoch: '26334.61234567' })]
    await useElementSet(deps, { id: first })
    await useElementSet(deps, { id: second })
    expect(await useElementSet(deps, { id: first })).toMatchObject({ state: 'in-use' })
    expect(await stateOf(deps, second)).toBe('past')
    expect(await inUse()).toBe(first)
    expect((await trailOf(deps, first)).map(row => row.action)).toEqual(['element-set.use', 'element-set.roll-back'])
  })

  it('is a conflict for a set that is in use, refused or of no spacecraft, and says what to do', async () => {
    const id = await addSet()
    await useElementSet(deps, { id })
    await expect(useElementSet(deps, { id })).rejects.toMatchObject({ code: 'conflict', message: expect.stringContaining('in use already') })
    const refused = await addSet({ anomaly: '100.0000' })
    await refuseElementSet(deps, { id: refused, reason: 'Poor fit' })
    await expect(useElementSet(deps, { id: refused })).rejects.toMatchObject({ code: 'conflict' })
    const stray = (await upload(deps, twoLines({ number: '90044', designator: '26844B' }))).sets
    expect(stray).toHaveLength(1)
    await expect(useElementSet(deps, { id: stray[0]!.id })).rejects.toMatchObject({ code: 'conflict', message: expect.stringContaining('make a spacecraft from it') })
    await expect(useElementSet(deps, { id: spacecraftId })).rejects.toMatchObject({ code: 'not-found' })
  })

  it('is not valid for an orbit that has decayed by now', async () => {
    // 16.4 rev/day, about 165 km up, with heavy drag: down within days of its epoch; now is weeks later.
    const id = await addSet({ meanMotion: '16.40000000', bstar: ' 50000-2' })
    await expect(useElementSet({ ...deps, now: new Date('2027-01-15T00:00:00Z') }, { id })).rejects.toMatchObject({ code: 'not-valid', message: expect.stringMatching(/decayed|Earth|eccentricity|latus/) })
    expect(await stateOf(deps, id)).toBe('waiting')
  })

  it('lets one of two win who decide for one spacecraft at once', async () => {
    const ids = [await addSet(), await addSet({ epoch: '26334.61234567' })]
    for (const pair of [[ids[0]!, ids[0]!], [ids[0]!, ids[1]!]]) {
      await deps.db.execute(sql`UPDATE spacecraft SET in_use_set_id = NULL`)
      await deps.db.execute(sql`UPDATE element_sets SET state = 'waiting'`)
      // Both have seen the same state before either is let through.
      const results = await whileLocked(() => Promise.allSettled(pair.map(id => useElementSet(deps, { id }))))
      expect(results.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
      expect(results.find(result => result.status === 'rejected')).toMatchObject({ reason: { code: 'conflict' } })
      expect([await stateOf(deps, ids[0]!), await stateOf(deps, ids[1]!)].filter(state => state === 'in-use')).toHaveLength(1)
    }
  })
})

/** Holds the spacecraft's row until everybody waits for it. */
async function whileLocked<T>(act: () => Promise<T>): Promise<T> {
  const client = await world.database.pool.connect()
  try {
    await client.query('BEGIN')
    await client.query('SELECT 1 FROM spacecraft FOR UPDATE')
    const results = act()
    // Asked outside the transaction, which would see the same activity for ever.
    await expect.poll(async () => Number((await deps.db.execute<{ n: string }>(sql`SELECT count(*) AS n FROM pg_stat_activity WHERE wait_event_type = 'Lock' AND datname = current_database()`)).rows[0]!.n), { timeout: 4000 }).toBe(2)
    await client.query('COMMIT')
    return await results
  }
  finally {
    client.release()
  }
}

describe('refusing a set', () => {
  it('keeps it on record with the reason; only a waiting set can be refused', async () => {
    const id = await addSet()
    expect(await refuseElementSet(deps, { id, reason: 'Someone else’s object' })).toMatchObject({ state: 'refused', reason: 'Someone else’s object', decidedBy: 'Flight desk' })
    expect(await trailOf(deps, id)).toMatchObject([{ action: 'element-set.refuse', reason: 'Someone else’s object' }])
    await expect(refuseElementSet(deps, { id, reason: 'Again' })).rejects.toMatchObject({ code: 'conflict' })
    const used = await addSet({ anomaly: '100.0000' })
    await useElementSet(deps, { id: used })
    await expect(refuseElementSet(deps, { id: used, reason: 'Too late' })).rejects.toMatchObject({ code: 'conflict' })
  })
})

describe('reading sets', () => {
  it('gives heights, age and original text', async () => {
    // Source: Kepler's third law by hand. 15.21987654 rev/day: n = 1.106818e-3 rad/s, a = (398600.8/n²)^⅓ = 6877.98 km.
    const set = await getElementSet(deps, await addSet())
    expect(set.perigeeKm).toBeCloseTo(6877.98 * (1 - 0.0012345) - 6378.137, 0)
    expect(set.apogeeKm).toBeCloseTo(6877.98 * (1 + 0.0012345) - 6378.137, 0)
    expect(set.ageHours).toBeCloseTo(5.70370, 4)
    expect(set.originalText.trim()).toBe(twoLines().trim())
    expect(set).toMatchObject({ spacecraftName: 'Invented One', uploadedBy: 'Flight desk', epochUtcUs: 1796041066665888 })
  })

  it('lists newest epoch first, page by page, by spacecraft, state and whether unclaimed', async () => {
    for (const day of ['26331', '26334', '26332', '26333']) await addSet({ epoch: `${day}.50000000` })
    const stray = await upload(deps, twoLines({ number: '90044', designator: '26844B' }))
    const page = (cursor?: string) => listElementSets(deps, { limit: 2, spacecraftId, ...(cursor ? { cursor } : {}) })
    const one = await page()
    const two = await page(one.nextCursor!)
    expect([...one.items, ...two.items].map(set => set.epoch.slice(0, 10))).toEqual(['2026-11-30', '2026-11-29', '2026-11-28', '2026-11-27'])
    expect(two.nextCursor).toBeNull()
    await useElementSet(deps, { id: one.items[0]!.id })
    expect((await listElementSets(deps, { limit: 100, state: 'in-use' })).items.map(set => set.id)).toEqual([one.items[0]!.id])
    expect((await listElementSets(deps, { limit: 100, unassigned: 'true' })).items.map(set => set.id)).toEqual(stray.sets.map(set => set.id))
    await expect(page('nonsense')).rejects.toMatchObject({ code: 'not-valid' })
  })
})
