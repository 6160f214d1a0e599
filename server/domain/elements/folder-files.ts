import type { FileHandle } from 'node:fs/promises'
import { constants } from 'node:fs'
import { lstat, mkdir, open, readdir, rename, rm, writeFile } from 'node:fs/promises'
import { isAbsolute, join, normalize, parse } from 'node:path'
import { DomainError } from '../errors'

export const outcomes = ['done', 'refused'] as const
export type FolderOutcome = typeof outcomes[number]

export interface FolderFile { name: string, size: number, mtimeMs: number }

/** What programs call a file while they still write it. */
const unfinished = /\.(?:part|tmp)$|~$/i

/** Files that lie in the folder itself; links are not followed, hidden and unfinished ones are passed over. */
export async function filesIn(folder: string): Promise<FolderFile[]> {
  const entries = await readdir(folder, { withFileTypes: true })
  const files: FolderFile[] = []
  for (const entry of entries) {
    if (!entry.isFile() || entry.name.startsWith('.') || unfinished.test(entry.name)) continue
    const found = await lstat(join(folder, entry.name)).catch(() => null)
    if (found?.isFile()) files.push({ name: entry.name, size: found.size, mtimeMs: found.mtimeMs })
  }
  return files.sort((a, b) => a.mtimeMs - b.mtimeMs || (a.name < b.name ? -1 : 1))
}

/** Opens a file of the folder that is still what was seen; null where it is not. */
export async function openSeen(folder: string, seen: FolderFile): Promise<FileHandle | null> {
  const file = await open(join(folder, seen.name), constants.O_RDONLY | constants.O_NOFOLLOW).catch(() => null)
  const now = await file?.stat()
  if (file && now?.isFile() && now.size === seen.size && now.mtimeMs === seen.mtimeMs) return file
  await file?.close()
  return null
}

const exists = (path: string) => lstat(path).then(() => true, () => false)

/**
 * Puts a file away with its report beside it. The report comes first: cut off in between, the file is still there, is
 * taken again with the same result, and both are put away then.
 */
export async function putAway(folder: string, name: string, outcome: FolderOutcome, report: string): Promise<void> {
  const place = await subfolder(folder, outcome)
  const { name: stem, ext } = parse(name)
  let free = name
  for (let count = 2; await exists(join(place, free)); count++) free = `${stem}-${count}${ext}`
  const draft = join(place, `.${free}.report`)
  await writeFile(draft, report, { mode: 0o640 })
  await rename(draft, join(place, `${free}.report.json`))
  await rename(join(folder, name), join(place, free))
}

async function subfolder(folder: string, outcome: FolderOutcome): Promise<string> {
  const place = join(folder, outcome)
  await mkdir(place).catch((error: NodeJS.ErrnoException) => {
    if (error.code !== 'EEXIST') throw error
  })
  if (!(await lstat(place)).isDirectory()) throw new Error(`${outcome} in the watched folder is no folder`)
  return place
}

/** @throws not-valid, with how to mend it, for a path that the server cannot or should not watch */
export async function checkWatchedFolder(folder: string): Promise<void> {
  const refuse = (message: string) => new DomainError('not-valid', `watchedFolder: ${message}`, [{ path: 'watchedFolder', message }])
  if (!isAbsolute(folder) || normalize(folder) !== folder || parse(folder).root === folder) throw refuse('Write the whole path of one folder, such as /srv/nullbeat/elements, without dots and without a slash at its end.')
  const found = await lstat(folder).catch(() => null)
  if (!found) throw refuse('There is no such folder on the server, or the server may not see it. Make it, and give it to the account that the server runs as.')
  if (!found.isDirectory()) throw refuse('This is no folder (a link to one is not followed). Name the folder itself.')
  const inside = await readdir(folder, { withFileTypes: true }).catch(() => null)
  if (!inside) throw refuse('The server may not read this folder. Give it to the account that the server runs as.')
  const other = inside.find(entry => entry.isDirectory() && !outcomes.some(name => name === entry.name))
  if (other) throw refuse('There are other folders in it. Every file that lies in a watched folder is taken and moved: make a folder for this alone.')
  try {
    for (const outcome of outcomes) await subfolder(folder, outcome)
    const probe = join(folder, outcomes[0], '.may-be-written')
    await writeFile(probe, '')
    await rm(probe)
  }
  catch {
    throw refuse('The server may not write in this folder, and it moves what it has taken. Give it to the account that the server runs as.')
  }
}
