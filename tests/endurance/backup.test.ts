import { mkdtempSync, rmSync, statSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { sql } from 'drizzle-orm'
import { expect, it } from 'vitest'
import { backup } from '../../server/cli/backup.mjs'
import { restore } from '../../server/cli/restore.mjs'
import { databaseNow, openDatabase } from '../../server/database/client'
import { createTestDatabase } from '../support/database'
import { layOutScene } from '../support/publication-scene'
import { startServer } from '../support/server'

it('a database of a year’s size is copied, read back with equal counts and hashes and served within ten minutes', async () => {
  const folder = mkdtempSync(join(tmpdir(), 'nullbeat-copy-'))
  const [source, target] = [await createTestDatabase(), await createTestDatabase({ empty: true })]
  const { db, close } = openDatabase(source.url, { max: 2 })
  try {
    const scene = await layOutScene(db, await databaseNow(db))
    for (let batch = 0; batch < 40; batch++) await scene.addApproved(1000, new Date(Date.now() + 3600_000 * (24 + batch)))
    for (let batch = 0; batch < 20; batch++) {
      await db.execute(sql`INSERT INTO audit (at, actor_kind, actor_name, action, entity_kind, entity_id, before, after)
        SELECT now(), 'system', 'Test', 'table.draft', 'table-revision', gen_random_uuid()::text, '{"state":"drafted"}', jsonb_build_object('n', n, 'text', repeat(md5(n::text), 6)) FROM generate_series(1, 25000) n`)
    }
    const began = performance.now()
    const file = join(folder, 'copy')
    const copied = await backup(source.url, file)
    expect(await restore(target.url, file)).toEqual(copied)
    const server = await startServer({ databaseUrl: target.url })
    const seconds = Math.round((performance.now() - began) / 1000)
    await server.stop()
    console.info({ rows: Object.values(copied).reduce((sum, { rows }) => sum + rows, 0), bytes: statSync(file).size, seconds })
    expect(seconds).toBeLessThan(600)
  }
  finally {
    await close()
    await source.drop()
    await target.drop()
    rmSync(folder, { recursive: true, force: true })
  }
})
