import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { elementUploadNotes, elementUploads } from '~~/server/database/schema'
import { cancelUpload } from '~~/server/domain/elements/cancel-upload'
import { claimOf } from '~~/server/domain/elements/read-upload'
import { resumeUploads } from '~~/server/domain/elements/resume-uploads'
import { getUpload, listUploads } from '~~/server/domain/elements/show-uploads'
import { takeLock } from '~~/server/domain/elements/storing-turn'
import { listUploadNotes } from '~~/server/domain/elements/upload-notes'
import { inParts, partBytes } from '~~/server/domain/elements/upload-parts'
import { uploadReportCsv } from '~~/server/domain/elements/upload-report-csv'
import { refusalOf } from '../../support/domain-test'
import type { World } from './support'
import { flight, openWorld, trailOf, twoLines, upload } from './support'

let world: World
beforeAll(async () => {
  world = await openWorld()
})
afterAll(() => world.close())

const csvOf = async (id: string) => {
  let text = ''
  for await (const piece of await uploadReportCsv(world.deps, id)) text += piece
  return text.trimEnd().split('\r\n')
}
const addUpload = async (values: Partial<typeof elementUploads.$inferInsert>) =>
  (await world.deps.db.insert(elementUploads).values({ state: 'finished', by: flight.name, source: 'api', totalBytes: 10, createdAt: world.deps.now, ...values }).returning())[0]!.id

describe('the report of an upload', () => {
  it('is a CSV by line: what became of each set and every remark, with nothing that a spreadsheet runs', async () => {
    await upload(world.deps, twoLines())
    const broken = `=1+1\n1 90009U 26801A   26334.51\n2 90009\n`
    const { id } = await upload(world.deps, `${twoLines()}@NEW\n${twoLines({ number: '90002' })}${broken}`)
    const lines = await csvOf(id)
    expect(lines[0]).toBe('line,outcome,name,catalogueNumber,epoch,spacecraft,code,message')
    expect(lines.slice(1, 3)).toEqual(['1,already held,,90001,2026-11-30T12:17:46.665Z,,,', '4,accepted,\'@NEW,90002,2026-11-30T12:17:46.665Z,,,'])
    expect(lines[3]).toMatch(/^7,refused,'=1\+1,,,,[a-z-]+,/)
    expect(lines).toHaveLength(4)
  })

  it('is whole as CSV however long it is, also where all stands on one line', async () => {
    const id = await addUpload({ refused: 12_000 })
    await world.deps.db.insert(elementUploadNotes).values(Array.from({ length: 12_000 }, (_, i) => ({ uploadId: id, kind: i % 3 === 0 ? 'warning' as const : 'refusal' as const, line: 1, code: 'c', message: `m${i}` })))
    const lines = (await csvOf(id)).slice(1)
    expect(new Set(lines).size).toBe(12_000)
    expect(lines.filter(line => line.startsWith('1,refused,'))).toHaveLength(8000)
  })

  it('shows the first thousand lines of each kind with the counts of all, and pages the rest by line', async () => {
    const id = await addUpload({ refused: 2500 })
    await world.deps.db.insert(elementUploadNotes).values(Array.from({ length: 2500 }, (_, i) => ({ uploadId: id, kind: 'refusal' as const, line: 2500 - i, code: 'c', message: 'm' })))
    const report = await getUpload(world.deps, id)
    expect([report.refused, report.refusals.length, report.refusals[0]!.line, report.refusals.at(-1)!.line]).toEqual([2500, 1000, 1, 1000])
    const seen: number[] = []
    for (let cursor: string | undefined; ;) {
      const page = await listUploadNotes(world.deps, id, { kind: 'refusal', limit: 999, cursor })
      seen.push(...page.items.map(note => note.line))
      if (!page.nextCursor) break
      cursor = page.nextCursor
    }
    expect(seen).toEqual(Array.from({ length: 2500 }, (_, i) => i + 1))
    expect(await refusalOf(listUploadNotes(world.deps, id, { kind: 'refusal', limit: 10, cursor: 'W10' }))).toMatchObject({ code: 'not-valid', paths: ['cursor'] })
  })
})

describe('an upload that is cancelled', () => {
  it('ends at once where nobody has it in hand, and is never read after', async () => {
    const id = await addUpload({ state: 'reading' })
    expect(await cancelUpload(world.deps, { id })).toMatchObject({ state: 'cancelled', cancelling: false })
    expect(await resumeUploads(world.deps)).toEqual({ resumed: 0, broken: 0 })
    expect((await trailOf(world.deps, id)).map(row => row.action)).toEqual(['element-sets.cancel-upload', 'element-sets.upload'])
    expect(await refusalOf(cancelUpload(world.deps, { id }))).toMatchObject({ code: 'conflict' })
  })

  it('says that it is being cancelled where somebody stores it', async () => {
    const id = await addUpload({ state: 'reading' })
    await world.deps.db.transaction(async (tx) => {
      await takeLock(tx, claimOf(id))
      expect(await cancelUpload(world.deps, { id })).toMatchObject({ state: 'reading', cancelling: true })
      expect(await cancelUpload(world.deps, { id })).toMatchObject({ cancelling: true })
    })
    // Its server died then: whoever takes it up gives it up.
    await resumeUploads(world.deps)
    expect(await getUpload(world.deps, id)).toMatchObject({ state: 'cancelled' })
  })

  it('is not one that is finished', async () => {
    expect(await refusalOf(cancelUpload(world.deps, { id: await addUpload({}) }))).toMatchObject({ code: 'conflict', message: expect.stringContaining('finished already') })
  })
})

it('uploads that were never sent whole are given up when no request can still be sending them', async () => {
  const [old, young] = [await addUpload({ state: 'receiving', createdAt: new Date(world.deps.now.getTime() - 11 * 60_000) }), await addUpload({ state: 'receiving' })]
  await resumeUploads(world.deps)
  expect([(await getUpload(world.deps, old)).state, (await getUpload(world.deps, young)).state]).toEqual(['failed', 'receiving'])
  expect((await listUploads(world.deps, { limit: 10, inHand: 'true' })).items.map(item => item.id)).toEqual([young])
})

it('pieces of any size become parts of one size and the same bytes', async () => {
  const pieces = [1, partBytes - 1, 0, 2 * partBytes + 5, 17].map((length, i) => Buffer.alloc(length, i))
  const parts: Buffer[] = []
  for await (const part of inParts(pieces)) parts.push(part)
  expect(parts.map(part => part.length)).toEqual([partBytes, partBytes, partBytes, 22])
  expect(Buffer.concat(parts).equals(Buffer.concat(pieces))).toBe(true)
})
