import { expect, it } from 'vitest'
import { createTestDatabase } from '../support/database'
import { killMigration, readShape, startMigration } from '../support/migration-kills'
import { runSeed, seededRandom } from '../support/random'

it('a migration killed at 200 random moments completes each time and leaves the same database', async () => {
  const whole = await createTestDatabase({ empty: true })
  const started = performance.now()
  expect(await startMigration(whole.url).ended).toMatchObject({ code: 0 })
  const lengthMs = performance.now() - started
  const expected = await readShape(whole.url)
  await whole.drop()
  const random = seededRandom(runSeed())
  for (let count = 0; count < 200; count++) {
    const { afterMs, rerun, applied, shape } = await killMigration(random() * lengthMs)
    expect(rerun, `killed after ${afterMs} ms`).toMatchObject({ code: 0 })
    expect({ applied, shape }, `killed after ${afterMs} ms`).toEqual(expected)
  }
})
