import { expect, it } from 'vitest'
import { liveThroughAnHour } from '../support/schedule-hour'

it('two servers run one schedule for an hour without a duplicate', async () => {
  process.env.NULLBEAT_TEST = '1'
  const figures = await liveThroughAnHour({ tables: 600 })
  console.info(figures)
  expect(figures.publications).toBe(600)
})
