import { createHash } from 'node:crypto'
import type { FileHandle } from 'node:fs/promises'
import { setTimeout as wait } from 'node:timers/promises'
import { and, desc, eq, gt, inArray, or, sql } from 'drizzle-orm'
import { uploadLimitBytes } from '#shared/routes'
import { elementUploads } from '~~/server/database/schema'
import type { Deps, ServerActor } from '../context'
import { readSettings } from '../settings/read-settings'
import type { FolderFile } from './folder-files'
import { filesIn, openSeen, putAway } from './folder-files'
import { receiveUpload, storeHeld } from './receive-upload'
import { findUpload, getUpload } from './show-uploads'
import { takeLock } from './storing-turn'
import { isInHand } from './upload-columns'
import { readOrLeave } from './upload-elements'

export const folderActor: ServerActor = { kind: 'system', name: 'Watched folder' }

/** What the last look has seen, by name: a file is taken when the next one finds it unchanged. */
export type FolderMemory = Map<string, Pick<FolderFile, 'size' | 'mtimeMs'>>

const keepAliveMs = 10_000
const patienceMs = 120_000

/**
 * Looks at the watched folder once, if one is set: uploads each file that has stopped growing since the last look and
 * moves it to done/ or refused/, its report beside it. One server at a time; a file cut off half-way is taken again, and
 * the same bytes give the result that they gave before. Gives the names of what it has put away.
 */
export async function lookAtFolder(deps: Pick<Deps, 'db' | 'now'>, memory: FolderMemory): Promise<string[]> {
  const { watchedFolder } = await readSettings(deps.db)
  if (!watchedFolder) {
    memory.clear()
    return []
  }
  const files = await filesIn(watchedFolder)
  const settled = files.filter(({ name, size, mtimeMs }) => memory.get(name)?.size === size && memory.get(name)?.mtimeMs === mtimeMs)
  memory.clear()
  for (const { name, size, mtimeMs } of files) memory.set(name, { size, mtimeMs })
  if (settled.length === 0) return []
  return deps.db.transaction(async (tx) => {
    if (!await takeLock(tx, 'elements-folder')) return []
    // The lock lasts as long as its connection, which must not look forgotten while a large file is read.
    const alive = setInterval(() => void Promise.resolve(tx.execute(sql`SELECT 1`)).catch(() => {}), keepAliveMs)
    const taken: string[] = []
    try {
      for (const file of settled) {
        await tx.execute(sql`SELECT 1`)
        if (await take({ ...deps, actor: folderActor }, watchedFolder, file)) taken.push(file.name)
      }
    }
    finally {
      clearInterval(alive)
    }
    return taken
  })
}

async function take(deps: Deps<ServerActor>, folder: string, seen: FolderFile): Promise<boolean> {
  const file = await openSeen(folder, seen)
  if (!file) return false
  try {
    if (seen.size > uploadLimitBytes) {
      await putAway(folder, seen.name, 'refused', reportText({ state: 'failed', detail: `The file has ${seen.size} bytes; at most ${uploadLimitBytes} are read. Split it.` }))
      return true
    }
    const id = await uploadOf(deps, file, seen.name)
    const report = await ended(deps, id)
    if (!report) return false
    await putAway(folder, seen.name, report.state === 'finished' ? 'done' : 'refused', reportText(report))
    return true
  }
  finally {
    await file.close()
  }
}

const reportText = (report: object): string => `${JSON.stringify(report, null, 2)}\n`

/** The upload that these bytes have become before, or become now. */
async function uploadOf(deps: Deps<ServerActor>, file: FileHandle, name: string): Promise<string> {
  const pieces = () => file.createReadStream({ start: 0, autoClose: false })
  const hash = createHash('sha256')
  for await (const piece of pieces()) hash.update(piece as Buffer)
  const sha256 = hash.digest('hex')
  // One that failed without a refusal was no fault of the file.
  const [before] = await deps.db.select({ id: elementUploads.id }).from(elementUploads)
    .where(and(eq(elementUploads.sha256, sha256), eq(elementUploads.source, 'folder'), or(inArray(elementUploads.state, ['reading', 'finished']), and(eq(elementUploads.state, 'failed'), gt(elementUploads.refused, 0)))))
    .orderBy(desc(elementUploads.createdAt)).limit(1)
  if (before) return before.id
  const origin = { source: 'folder' as const, fileName: name }
  const received = await receiveUpload(deps, origin, pieces())
  return received.kind === 'stored' ? received.id : storeHeld(deps, origin, received)
}

/** The upload's report when it has ended, read here or elsewhere; null where it takes too long to wait for. */
async function ended(deps: Deps<ServerActor>, id: string) {
  await readOrLeave(deps, id)
  for (let waitedMs = 0; waitedMs < patienceMs; waitedMs += 500) {
    if (!isInHand(await findUpload(deps.db, id))) return getUpload(deps, id)
    await wait(500)
  }
  return null
}
