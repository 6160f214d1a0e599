import { mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { backup } from '../../server/cli/backup.mjs'
import { restore } from '../../server/cli/restore.mjs'
import { openDatabase } from '../../server/database/client'
import { settings } from '../../server/database/schema'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import { demoPassword, startServer } from '../support/server'

let folder: string
let source: TestDatabase
let target: TestDatabase
beforeAll(async () => {
  folder = mkdtempSync(join(tmpdir(), 'nullbeat-copy-'))
  source = await createTestDatabase()
  target = await createTestDatabase({ empty: true })
})
afterAll(async () => {
  await source?.drop()
  await target?.drop()
  rmSync(folder, { recursive: true, force: true })
})

it('what a server keeps is copied while it works, read back elsewhere with equal counts and hashes, and served from there', { timeout: 240_000 }, async () => {
  const began = performance.now()
  const { db, close } = openDatabase(source.url, { max: 1 })
  await db.insert(settings).values({ key: 'other', value: 1 })
  const first = await startServer({ databaseUrl: source.url, demo: true })
  const file = join(folder, 'copy')
  const copied = await backup(source.url, file)
  await first.stop()
  expect(copied['public.element_sets']!.rows).toBeGreaterThan(8)
  expect(copied['public.audit']!.rows).toBeGreaterThan(0)
  expect(copied['drizzle.__drizzle_migrations']!.rows).toBeGreaterThan(0)
  expect([statSync(file).mode & 0o077, statSync(`${file}.json`).mode & 0o077]).toEqual([0, 0])

  expect(await restore(target.url, file)).toEqual(copied)
  const second = await startServer({ databaseUrl: target.url, demo: true })
  const signIn = await fetch(`${second.url}/api/auth/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify({ email: 'flight@tern-bay.example', password: demoPassword }) })
  expect(signIn.status).toBe(200)
  await second.stop()
  console.info({ tables: Object.keys(copied).length, rows: Object.values(copied).reduce((sum, { rows }) => sum + rows, 0), bytes: statSync(file).size, seconds: Math.round((performance.now() - began) / 1000) })

  // Not empty any more: only by its name, and then as if it had been.
  await expect(restore(target.url, file)).rejects.toThrow(/is not empty/)
  await expect(restore(target.url, file, { over: 'another' })).rejects.toThrow(/nothing was changed/)
  const name = new URL(target.url).pathname.slice(1)
  expect(await restore(target.url, file, { over: name })).toEqual(copied)
  // A copy of what was restored is a copy like any other.
  const again = join(folder, 'again')
  expect(await backup(target.url, again)).toEqual(copied)
  expect(await restore(target.url, again, { over: name })).toEqual(copied)

  await expect(backup(source.url, file)).rejects.toThrow(/is there already/)
  const torn = join(folder, 'torn')
  writeFileSync(torn, readFileSync(file).subarray(0, 1000))
  await expect(restore(target.url, torn, { over: name })).rejects.toThrow(/nothing was changed/)
  // One value that differs is told by its table.
  await db.update(settings).set({ value: 2 }).where(eq(settings.key, 'other'))
  await close()
  const other = join(folder, 'other')
  await backup(source.url, other)
  writeFileSync(`${other}.json`, readFileSync(`${file}.json`))
  await expect(restore(target.url, other, { over: name })).rejects.toThrow(/public\.settings: \d+ rows, /)
})
