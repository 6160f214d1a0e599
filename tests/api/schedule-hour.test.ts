import { expect, it } from 'vitest'
import { liveThroughAnHour } from '../support/schedule-hour'

it('an hour of schedule, passed quickly, leads two servers to one publication of each table and one evening of each station', { timeout: 180_000 }, async () => {
  process.env.NULLBEAT_TEST = '1'
  const figures = await liveThroughAnHour({ tables: 60, quick: { steps: 4, stepWaitMs: 4000 } })
  console.info(figures)
  expect(figures.publications).toBe(60)
})
