import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { elementSets, spacecraft } from '~~/server/database/schema'
import { assignElementSet, assignElementSets } from '~~/server/domain/elements/assign-element-sets'
import { handleOneUnassigned, handleUnassigned } from '~~/server/domain/elements/handle-unassigned'
import { listElementSets } from '~~/server/domain/elements/read-element-sets'
import { countSets } from '~~/server/domain/elements/unassigned-sets'
import { useElementSet } from '~~/server/domain/elements/use-element-set'
import { refusalOf } from '../../support/domain-test'
import type { World } from './support'
import { NOW, addSpacecraft, openWorld, stateOf, trailOf, twoLines, upload } from './support'

const named = (number: string, name: string) => `${name}\n${twoLines({ number })}`

describe('sets that belong to no spacecraft', () => {
  let world: World
  let ids: string[]
  let uploadId: string
  beforeAll(async () => {
    world = await openWorld()
    const report = await upload(world.deps, named('50001', 'FAR ONE') + named('50002', 'FAR TWO') + named('60003', '100%_SURE'))
    uploadId = report.id
    ids = report.sets.map(set => set.id)
  })
  afterAll(() => world.close())
  const find = async (query: Record<string, string>) => (await listElementSets(world.deps, { limit: 100, ...query } as never)).items.map(set => set.catalogueNumber).sort()

  it('are found by a part of their name, by the beginning of their number, and by their upload', async () => {
    expect(await find({ q: 'far' })).toEqual(['50001', '50002'])
    expect(await find({ q: '0600' })).toEqual(['60003'])
    expect(await find({ q: '100%_' })).toEqual(['60003'])
    expect(await find({ q: '_' })).toEqual(['60003'])
    expect(await find({ uploadId })).toEqual(['50001', '50002', '60003'])
    const again = await upload(world.deps, twoLines({ number: '50001' }))
    expect(await find({ uploadId: again.id })).toEqual(['50001'])
  })

  it('are kept, dropped and put back, one by one, each with its row of the trail', async () => {
    await handleOneUnassigned(world.deps, 'kept', { id: ids[0]! })
    await handleOneUnassigned(world.deps, 'dropped', { id: ids[1]! })
    expect(await countSets(world.deps)).toEqual({ waiting: 0, open: 1, kept: 1, dropped: 1 })
    expect([await find({ handling: 'open' }), await find({ handling: 'kept' }), await find({ handling: 'dropped' })]).toEqual([['60003'], ['50001'], ['50002']])
    const [row] = await world.deps.db.select().from(elementSets).where(eq(elementSets.id, ids[1]!))
    expect(row).toMatchObject({ state: 'refused', reason: 'dropped', decidedBy: 'Flight desk' })
    expect(await refusalOf(handleOneUnassigned(world.deps, 'dropped', { id: ids[1]! }))).toMatchObject({ code: 'conflict' })
    expect(await handleUnassigned(world.deps, 'open', { ids: ids.slice(0, 2) })).toEqual({ changed: 2 })
    expect(await countSets(world.deps)).toMatchObject({ open: 3, kept: 0, dropped: 0 })
    expect((await trailOf(world.deps, ids[1]!)).map(row => row.action)).toEqual(['element-set.drop', 'element-set.reopen'])
  })

  it('are dropped all of an upload or of a search at once, with one row of the trail', async () => {
    expect(await handleUnassigned(world.deps, 'dropped', { q: 'FAR' })).toEqual({ changed: 2 })
    expect(await handleUnassigned(world.deps, 'dropped', { uploadId })).toEqual({ changed: 1 })
    expect((await trailOf(world.deps, uploadId)).map(row => row.action)).toContain('element-set.drops')
    expect(await handleUnassigned(world.deps, 'open', { uploadId, handling: 'dropped' })).toEqual({ changed: 3 })
  })

  it('wait for the spacecraft that they are given to, dropped ones too; all or none', async () => {
    const craft = await addSpacecraft(world.deps, { name: 'Taker', catalogueNumber: '7', designator: null })
    await handleOneUnassigned(world.deps, 'dropped', { id: ids[0]! })
    expect(await assignElementSet(world.deps, { id: ids[0]!, spacecraftId: craft })).toMatchObject({ spacecraftId: craft, spacecraftName: 'Taker', state: 'waiting', reason: null })
    expect(await refusalOf(assignElementSets(world.deps, { ids: [ids[1]!, ids[0]!], spacecraftId: craft }))).toMatchObject({ code: 'conflict' })
    expect((await world.deps.db.select().from(elementSets).where(eq(elementSets.id, ids[1]!)))[0]!.spacecraftId).toBeNull()
    expect(await refusalOf(handleOneUnassigned(world.deps, 'dropped', { id: ids[0]! }))).toMatchObject({ code: 'conflict', message: expect.stringContaining('belongs to a spacecraft') })
    const other = await addSpacecraft(world.deps, { name: 'Other', catalogueNumber: '8', designator: null })
    expect(await assignElementSet(world.deps, { id: ids[0]!, spacecraftId: other })).toMatchObject({ spacecraftId: other })
  })

  it('are not given to a retired spacecraft, nor taken from one that flies by them', async () => {
    const craft = await addSpacecraft(world.deps, { name: 'Flier', catalogueNumber: '9', designator: null })
    const retired = await addSpacecraft(world.deps, { name: 'Gone', catalogueNumber: '10', designator: null, retiredAt: NOW })
    expect(await refusalOf(assignElementSet(world.deps, { id: ids[2]!, spacecraftId: retired }))).toMatchObject({ code: 'not-valid', paths: ['spacecraftId'] })
    await assignElementSet(world.deps, { id: ids[2]!, spacecraftId: craft })
    await useElementSet(world.deps, { id: ids[2]! })
    const other = (await world.deps.db.select().from(spacecraft).where(eq(spacecraft.name, 'Other')))[0]!.id
    expect(await refusalOf(assignElementSet(world.deps, { id: ids[2]!, spacecraftId: other }))).toMatchObject({ code: 'conflict', message: expect.stringContaining('in use') })
    expect(await stateOf(world.deps, ids[2]!)).toBe('in-use')
  })

  it('that were dropped come back when they are uploaded again and match a spacecraft by then', async () => {
    await handleOneUnassigned(world.deps, 'dropped', { id: ids[1]! })
    const craft = await addSpacecraft(world.deps, { name: 'Late', catalogueNumber: '50002', designator: null })
    const again = await upload(world.deps, twoLines({ number: '50002' }))
    expect(again).toMatchObject({ accepted: 0, alreadyHeld: 1, sets: [{ id: ids[1], spacecraftId: craft, state: 'waiting' }] })
  })
})
