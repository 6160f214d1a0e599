import { mkdir, mkdtemp, readFile, readdir, rm, symlink, truncate, writeFile } from 'node:fs/promises'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { elementSets, elementUploads, settings } from '~~/server/database/schema'
import { lookAtFolder } from '~~/server/domain/elements/folder'
import { checkWatchedFolder } from '~~/server/domain/elements/folder-files'
import { receiveUpload, storeHeld } from '~~/server/domain/elements/receive-upload'
import { takeLock } from '~~/server/domain/elements/storing-turn'
import { changeSettings } from '~~/server/domain/settings/change-settings'
import { refusalOf } from '../../support/domain-test'
import type { World } from './support'
import { openWorld, twoLines } from './support'

let world: World
let folder: string
beforeEach(async () => {
  world = await openWorld()
  folder = await mkdtemp(join(tmpdir(), 'nullbeat-folder-'))
  await world.deps.db.insert(settings).values({ key: 'watchedFolder', value: folder })
})
afterEach(async () => {
  await world.close()
  await rm(folder, { recursive: true, force: true })
})
const put = (name: string, text = twoLines()) => writeFile(join(folder, name), text)
const names = async (inside = '') => (await readdir(join(folder, inside)).catch(() => [])).sort()
const uploads = () => world.deps.db.select().from(elementUploads)
/** So many looks, one after the other. */
async function look(times = 2) {
  const memory = new Map()
  for (let i = 0; i < times; i++) await lookAtFolder(world.deps, memory)
}

describe('the watched folder', () => {
  it('is emptied into done and refused, each file with its report beside it', async () => {
    await put('night.tle', `${twoLines()}${twoLines({ anomaly: '100.0000' })}`)
    await put('letter.txt', 'Dear colleague, no sets tonight.')
    await look()
    expect(await names()).toEqual(['done', 'refused'])
    expect(await names('done')).toEqual(['night.tle', 'night.tle.report.json'])
    expect(await names('refused')).toEqual(['letter.txt', 'letter.txt.report.json'])
    expect(JSON.parse(await readFile(join(folder, 'done/night.tle.report.json'), 'utf8'))).toMatchObject({ state: 'finished', source: 'folder', fileName: 'night.tle', by: 'Watched folder', accepted: 2 })
    expect(JSON.parse(await readFile(join(folder, 'refused/letter.txt.report.json'), 'utf8'))).toMatchObject({ state: 'failed', refusals: [{ line: 1, message: expect.stringMatching(/\w/) }] })
    expect((await uploads()).map(upload => upload.source)).toEqual(['folder', 'folder'])
  })

  it('leaves a file that still grows, and what its writer says is not finished', async () => {
    const memory = new Map()
    await put('growing.tle')
    await lookAtFolder(world.deps, memory)
    await put('growing.tle', twoLines() + twoLines({ anomaly: '100.0000' }))
    await lookAtFolder(world.deps, memory)
    expect(await names()).toEqual(['growing.tle'])
    await lookAtFolder(world.deps, memory)
    expect(await names('done')).toContain('growing.tle')
    for (const name of ['a.part', 'b.tmp', '.hidden', 'c.tle~']) await put(name)
    await look(3)
    expect(await names()).toEqual(['.hidden', 'a.part', 'b.tmp', 'c.tle~', 'done'])
  })

  it('follows no link, and takes no folder for a file', async () => {
    const outside = await mkdtemp(join(tmpdir(), 'nullbeat-outside-'))
    await writeFile(join(outside, 'secret.tle'), twoLines())
    await symlink(join(outside, 'secret.tle'), join(folder, 'link.tle'))
    await symlink(outside, join(folder, 'refused'))
    await mkdir(join(folder, 'inner.tle'))
    await look(3)
    expect([await uploads(), await names()]).toEqual([[], ['inner.tle', 'link.tle', 'refused']])
    await put('letter.txt', 'nothing')
    await expect(look()).rejects.toThrow('no folder')
    expect(await readdir(outside)).toEqual(['secret.tle'])
    await rm(outside, { recursive: true })
  })

  it('gives the same bytes the same result, and overwrites nothing that it put away', async () => {
    await put('a.tle')
    await look()
    await put('a.tle')
    await put('b.tle')
    await look()
    expect((await uploads()).length).toBe(1)
    expect((await names('done')).filter(name => !name.endsWith('.json'))).toEqual(['a-2.tle', 'a.tle', 'b.tle'])
    expect(await world.deps.db.$count(elementSets)).toBe(1)
  })

  it('ends what a crash cut off: stored and not read, or read and not put away', async () => {
    await put('night.tle')
    const received = await receiveUpload(world.deps, { source: 'folder', fileName: 'night.tle' }, [Buffer.from(twoLines())])
    if (received.kind === 'held') await storeHeld(world.deps, { source: 'folder', fileName: 'night.tle' }, received)
    await look()
    expect((await uploads()).map(upload => upload.state)).toEqual(['finished'])
    expect(await names('done')).toContain('night.tle')
    // Its report was written, then the server died.
    await put('again.tle', twoLines({ anomaly: '100.0000' }))
    await writeFile(join(folder, 'done/again.tle.report.json'), 'from before')
    await look()
    expect(await names('done')).toContain('again.tle')
    expect(JSON.parse(await readFile(join(folder, 'done/again.tle.report.json'), 'utf8'))).toMatchObject({ accepted: 1 })
  })

  it('is looked after by one server at a time', async () => {
    await put('night.tle')
    await world.deps.db.transaction(async (tx) => {
      expect(await takeLock(tx, 'elements-folder')).toBe(true)
      await look()
    })
    expect(await uploads()).toEqual([])
    await look()
    expect(await names('done')).toContain('night.tle')
  })

  it('refuses what is too large without reading it', async () => {
    await put('huge.tle', '')
    await truncate(join(folder, 'huge.tle'), 51 * 1024 * 1024)
    await look()
    expect(await names('refused')).toEqual(['huge.tle', 'huge.tle.report.json'])
    expect(await uploads()).toEqual([])
  })
})

describe('a folder to be watched', () => {
  const refused = async (path: string) => (await refusalOf(changeSettings(world.deps, { watchedFolder: path }))).message

  it('is taken when it is there for this alone and may be written', async () => {
    const other = await mkdtemp(join(tmpdir(), 'nullbeat-folder-'))
    expect(await refusalOf(changeSettings(world.deps, { watchedFolder: other }).then(() => { throw new Error('taken') }))).toMatchObject({ message: 'taken' })
    await rm(other, { recursive: true })
  })

  it('is refused, with how to mend it, where it is not', async () => {
    expect(await refused('srv/elements')).toContain('whole path')
    expect(await refused('/')).toContain('whole path')
    expect(await refused(`${folder}/../x`)).toContain('whole path')
    expect(await refused(join(folder, 'missing'))).toContain('Make it')
    await put('file')
    expect(await refused(join(folder, 'file'))).toContain('no folder')
    await symlink(folder, `${folder}-link`)
    expect(await refused(`${folder}-link`)).toContain('link')
    await rm(`${folder}-link`)
    await mkdir(join(folder, 'archive'))
    await expect(checkWatchedFolder(folder)).rejects.toThrow('for this alone')
  })
})
