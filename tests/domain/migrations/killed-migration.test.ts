import { describe, expect, it } from 'vitest'
import journal from '../../../drizzle/meta/_journal.json'
import { createTestDatabase } from '../../support/database'
import { killMigration, readShape, startMigration } from '../../support/migration-kills'
import { runSeed, seededRandom } from '../../support/random'

const kills = 10

describe('a migration', () => {
  it('that is killed at any moment completes when it is run again, and leaves the same database', { timeout: 180_000 }, async () => {
    const whole = await createTestDatabase({ empty: true })
    const started = performance.now()
    expect(await startMigration(whole.url).ended).toMatchObject({ code: 0 })
    const lengthMs = performance.now() - started
    const expected = await readShape(whole.url)
    await whole.drop()
    expect(expected.applied).toBe(journal.entries.length)

    const random = seededRandom(runSeed())
    for (let count = 0; count < kills; count++) {
      const { afterMs, rerun, applied, shape } = await killMigration(random() * lengthMs)
      expect(rerun, `killed after ${afterMs} ms`).toMatchObject({ code: 0 })
      expect({ applied, shape }, `killed after ${afterMs} ms`).toEqual(expected)
    }
  })

  it('runs once where two are started at the same time', async () => {
    const { url, drop } = await createTestDatabase({ empty: true })
    const both = await Promise.all([startMigration(url).ended, startMigration(url).ended])
    const { applied } = await readShape(url)
    await drop()
    expect(both).toEqual([expect.objectContaining({ code: 0 }), expect.objectContaining({ code: 0 })])
    expect(applied).toBe(journal.entries.length)
  })
})
