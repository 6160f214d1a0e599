import { eq } from 'drizzle-orm'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { alerts, elementSets, spacecraft } from '~~/server/database/schema'
import type { Deps } from '~~/server/domain/context'
import { reconcileAlerts } from '~~/server/domain/alerts/reconcile-alerts'
import { changeSpacecraft } from '~~/server/domain/catalogue/change-spacecraft'
import { autoUse, requestAutoUse } from '~~/server/domain/elements/auto-use'
import { getElementSet } from '~~/server/domain/elements/read-element-sets'
import { scheduleUse } from '~~/server/domain/elements/schedule-use'
import { useElementSet } from '~~/server/domain/elements/use-element-set'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'
import { createPerson } from '../prediction/fleet'
import type { World } from './support'
import { NOW, addLink, addSpacecraft, addStation, openWorld, stateOf, trailOf, twoLines, upload } from './support'

// 0.003° of mean anomaly is 0.36 km, 47 ms, at most 7.6 Hz at 437 MHz: half a sigma of two sets with 0.5 km each (mechanics).
const near = { epoch: '26334.51234568', anomaly: '272.5708' }
const rule = { maxShiftS: 0.5, maxAllowanceShare: 0.2, maxSigmas: 2 }

let world: World
let deps: Deps
let spacecraftId: string
let first: string
beforeEach(async () => {
  world = await openWorld()
  deps = { ...world.deps, actor: await createPerson(world.deps.db, 'Flight', ['flight-dynamics']) }
  spacecraftId = await addSpacecraft(deps)
  await addStation(deps)
  await addLink(deps, spacecraftId)
  first = await addSet()
  await useElementSet(deps, { id: first })
  await emptyQueue(deps.db)
})
afterEach(() => world.close())

const addSet = async (change: Parameters<typeof twoLines>[0] = {}) => (await upload(deps, twoLines(change))).sets[0]!.id
const setRule = (autoUse: typeof rule | null) => changeSpacecraft(deps, spacecraftId, { autoUse })
const judge = () => autoUse(deps, { spacecraftId })
const inUse = async () => (await deps.db.select({ id: spacecraft.inUseSetId }).from(spacecraft).where(eq(spacecraft.id, spacecraftId)))[0]!.id
const why = async (id: string) => (await getElementSet(deps, id)).ruleDeclined

describe('the rule for plausible sets', () => {
  it('is off unless somebody sets it: nothing is judged', async () => {
    const id = await addSet(near)
    expect(await requestAutoUse(deps)).toBe(0)
    expect(await judge()).toBeNull()
    expect(await stateOf(deps, id)).toBe('waiting')
  })

  it('leaves to people what was found to fit another spacecraft better', async () => {
    await setRule(rule)
    const id = await addSet(near)
    await deps.db.update(elementSets).set({ warnings: [{ line: 1, code: 'fits-another', message: 'It lies closer to another.' }] }).where(eq(elementSets.id, id))
    expect(await judge()).toBeNull()
    expect(await why(id)).toBe('It lies closer to another.')
  })

  it('takes a newer set within its limits into use, in its own name and with its figures', async () => {
    await setRule(rule)
    const id = await addSet(near)
    expect(await requestAutoUse(deps)).toBe(1)
    expect(await queuedJobs(deps.db, 'auto-use')).toEqual([{ spacecraftId }])
    expect(await judge()).toBe(id)
    expect(await inUse()).toBe(id)
    expect(await getElementSet(deps, id)).toMatchObject({ state: 'in-use', decidedBy: 'Rule: use what is plausible' })
    expect((await trailOf(deps, id)).at(-1)).toMatchObject({ action: 'element-set.use', actorKind: 'schedule', reason: expect.stringMatching(/0\.0\d s at most/) })
    expect((await queuedJobs(deps.db, 'predict')).map(job => job.spacecraftId)).toEqual([spacecraftId])
    expect(await requestAutoUse(deps)).toBe(0)
  })

  it.each([
    ['a shift beyond its limit', near, { ...rule, maxShiftS: 0.03 }, /moves by 0\.0\d s; the rule allows 0\.03 s/],
    ['Doppler beyond its share of the allowance', near, { ...rule, maxAllowanceShare: 0.001 }, /of its allowance; the rule allows 0 %/],
    ['a distance along the track beyond its sigmas', near, { ...rule, maxSigmas: 0.3 }, /0\.5 σ from the set in use; the rule allows 0\.3 σ/],
    ['any warning', { ...near, bstar: '-12345-4' }, rule, /B\* is/],
  ])('leaves %s to people, says why on the set, and judges it once', async (_, change, given, words) => {
    await setRule(given)
    const id = await addSet(change)
    expect(await judge()).toBeNull()
    expect(await stateOf(deps, id)).toBe('waiting')
    expect(await why(id)).toMatch(words)
    expect(await requestAutoUse(deps)).toBe(0)
    expect(await judge()).toBeNull()
    expect((await trailOf(deps, id)).filter(row => row.action === 'element-set.rule-declines')).toHaveLength(1)
    await reconcileAlerts(deps, { kinds: ['auto-use-declined'] })
    expect(await deps.db.select().from(alerts)).toMatchObject([{ state: 'open', severity: 'notice', detail: expect.stringMatching(words) }])
  })

  it('judges anew what it left once its limits change', async () => {
    await setRule({ ...rule, maxShiftS: 0.03 })
    const id = await addSet(near)
    await judge()
    await setRule(rule)
    expect(await why(id)).toBeNull()
    expect(await judge()).toBe(id)
  })

  it('takes the newest that is plausible, and passes over older sets than the one in use', async () => {
    await setRule(rule)
    const older = await addSet({ epoch: '26334.41234567', anomaly: '272.5678' })
    const good = await addSet(near)
    const wild = await addSet({ epoch: '26334.51234570', anomaly: '275.0000' })
    expect(await judge()).toBe(good)
    expect(await why(wild)).toContain('σ')
    expect(await stateOf(deps, older)).toBe('waiting')
  })

  it('gives way to what a person has scheduled', async () => {
    await setRule(rule)
    const id = await addSet(near)
    const mine = await addSet({ epoch: '26334.51234569' })
    await scheduleUse(deps, { id: mine, at: new Date(NOW.getTime() + 3_600_000).toISOString() })
    expect(await judge()).toBeNull()
    expect(await why(id)).toContain('Flight has scheduled another set')
  })

  it('takes no first set: there is nothing to compare it with', async () => {
    await setRule(rule)
    await deps.db.update(spacecraft).set({ inUseSetId: null })
    const id = await addSet(near)
    expect(await judge()).toBeNull()
    expect(await why(id)).toContain('No set is in use')
  })
})
