import { eq } from 'drizzle-orm'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { alerts, people, spacecraft } from '~~/server/database/schema'
import type { Deps } from '~~/server/domain/context'
import { reconcileAlerts } from '~~/server/domain/alerts/reconcile-alerts'
import { getElementSet } from '~~/server/domain/elements/read-element-sets'
import { refuseElementSet } from '~~/server/domain/elements/refuse-element-set'
import { findDueUses } from '~~/server/domain/elements/run-scheduled-uses'
import { cancelUse, scheduleUse } from '~~/server/domain/elements/schedule-use'
import { useElementSet } from '~~/server/domain/elements/use-element-set'
import { wake } from '~~/server/domain/schedule/wake'
import { refusalOf } from '../../support/domain-test'
import { createPerson } from '../prediction/fleet'
import type { World } from './support'
import { NOW, addSpacecraft, openWorld, stateOf, trailOf, twoLines, upload } from './support'

let world: World
let deps: Deps
let spacecraftId: string
let first: string
let second: string
beforeEach(async () => {
  world = await openWorld()
  deps = { ...world.deps, actor: await createPerson(world.deps.db, 'Flight', ['flight-dynamics']) }
  spacecraftId = await addSpacecraft(deps)
  first = await addSet()
  second = await addSet({ epoch: '26334.61234567' })
  await useElementSet(deps, { id: first })
})
afterEach(() => world.close())

const addSet = async (change: Parameters<typeof twoLines>[0] = {}) => (await upload(deps, twoLines(change))).sets[0]!.id
const later = (minutes: number) => new Date(NOW.getTime() + minutes * 60_000)
const at = later(60).toISOString()
const wakeAt = (minutes: number) => wake({ db: deps.db, now: later(minutes) }, { withAlerts: false, onError: (part, error) => {
  throw new Error(part, { cause: error })
} })
const inUse = async () => (await deps.db.select({ id: spacecraft.inUseSetId }).from(spacecraft).where(eq(spacecraft.id, spacecraftId)))[0]!.id
const lastTrail = async (id: string) => (await trailOf(deps, id)).at(-1)

describe('putting a set into use at an instant', () => {
  it('happens at that instant and not before, once, in the name of who scheduled it', async () => {
    expect(await scheduleUse(deps, { id: second, at })).toMatchObject({ state: 'waiting', useAt: at, useScheduledBy: 'Flight' })
    await wakeAt(59)
    expect(await inUse()).toBe(first)
    await Promise.all([wakeAt(60), wakeAt(60)])
    expect(await inUse()).toBe(second)
    expect(await getElementSet(deps, second)).toMatchObject({ state: 'in-use', decidedBy: 'Flight', decidedAt: at, useAt: null })
    expect((await trailOf(deps, second)).map(row => [row.action, row.actorName])).toEqual([['element-set.schedule-use', 'Flight'], ['element-set.use', 'Flight']])
    expect((await lastTrail(second))!.reason).toContain('2026-11-30 19:00:00 UTC')
  })

  it('can be moved and taken back', async () => {
    await scheduleUse(deps, { id: second, at })
    await scheduleUse(deps, { id: second, at: later(90).toISOString() })
    await wakeAt(60)
    expect(await inUse()).toBe(first)
    expect(await cancelUse(deps, { id: second })).toMatchObject({ useAt: null, state: 'waiting' })
    await wakeAt(100)
    expect(await inUse()).toBe(first)
    expect(await refusalOf(cancelUse(deps, { id: second }))).toMatchObject({ code: 'conflict' })
  })

  it('is for one set of a spacecraft at one instant, for sets that can be used, ahead of now and not for ever', async () => {
    const third = await addSet({ epoch: '26334.65234567' })
    await scheduleUse(deps, { id: second, at })
    expect(await refusalOf(scheduleUse(deps, { id: third, at }))).toMatchObject({ code: 'conflict', message: expect.stringContaining('2026-11-30 14:41') })
    await scheduleUse(deps, { id: third, at: later(61).toISOString() })
    expect(await refusalOf(scheduleUse(deps, { id: first, at }))).toMatchObject({ code: 'conflict' })
    for (const minutes of [0, -5, 31 * 1440]) expect(await refusalOf(scheduleUse(deps, { id: second, at: later(minutes).toISOString() }))).toMatchObject({ code: 'not-valid', paths: ['at'] })
    await refuseElementSet(deps, { id: second, reason: 'Poor fit' })
    expect(await refusalOf(scheduleUse(deps, { id: second, at }))).toMatchObject({ code: 'conflict' })
    expect(await refusalOf(scheduleUse(world.deps, { id: third, at }))).toMatchObject({ code: 'not-allowed' })
  })

  it('ends when the set is refused or used before', async () => {
    await scheduleUse(deps, { id: second, at })
    await refuseElementSet(deps, { id: second, reason: 'Poor fit' })
    expect(await lastTrail(second)).toMatchObject({ action: 'element-set.refuse', before: { useAt: at } })
    const third = await addSet({ epoch: '26334.65234567' })
    await scheduleUse(deps, { id: third, at })
    await useElementSet(deps, { id: third })
    expect(await findDueUses({ db: deps.db, now: later(100) })).toEqual([])
  })
})

describe('a scheduled use that can no longer be', () => {
  const declined = async (why: string) => {
    await wakeAt(60)
    expect(await stateOf(deps, second)).toBe('waiting')
    expect(await getElementSet(deps, second)).toMatchObject({ useAt: null })
    expect(await lastTrail(second)).toMatchObject({ action: 'element-set.use-declined', reason: expect.stringContaining(why), before: { useScheduledBy: 'Flight' } })
    await reconcileAlerts({ ...deps, now: later(61) }, { kinds: ['auto-use-declined'] })
    expect(await deps.db.select().from(alerts)).toMatchObject([{ kind: 'auto-use-declined', severity: 'notice', state: 'open', spacecraftId, detail: expect.stringContaining(why) }])
  }

  it('says so where another was put into use since, and its alert closes with the next decision', async () => {
    const third = await addSet({ epoch: '26334.65234567' })
    await scheduleUse(deps, { id: second, at })
    await useElementSet(deps, { id: third })
    await declined('another set')
    expect(await inUse()).toBe(third)
    await refuseElementSet({ ...deps, now: later(70) }, { id: second, reason: 'Too old by now' })
    await reconcileAlerts({ ...deps, now: later(71) }, { kinds: ['auto-use-declined'] })
    expect(await deps.db.select().from(alerts)).toMatchObject([{ state: 'closed' }])
  })

  it('says so where who scheduled it may no longer', async () => {
    await scheduleUse(deps, { id: second, at })
    await deps.db.update(people).set({ roles: ['reader'] }).where(eq(people.name, 'Flight'))
    await declined('may no longer')
  })

  it('says so where the spacecraft has been retired', async () => {
    await scheduleUse(deps, { id: second, at })
    await deps.db.update(spacecraft).set({ retiredAt: later(30) })
    await wakeAt(60)
    expect(await lastTrail(second)).toMatchObject({ action: 'element-set.use-declined', reason: expect.stringContaining('retired') })
  })
})
