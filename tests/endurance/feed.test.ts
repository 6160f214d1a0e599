import { expect, it } from 'vitest'
import { runFeedLoad } from '../support/feed-load'

it('200 station polls a second for ten minutes by tag: 95 % unchanged, 99 % within 50 ms, no error', { timeout: 1200_000 }, async () => {
  const run = await runFeedLoad({ pollsPerS: 200, seconds: 600 })
  console.info(`feed: ${JSON.stringify(run)}`)
  expect(run.polls).toBeGreaterThan(119_000)
  expect(Object.keys(run.statuses).sort()).toEqual(['200', '304'])
  expect(run.notModifiedShare).toBeGreaterThanOrEqual(0.95)
  expect(run.p99Ms).toBeLessThanOrEqual(50)
  expect(run.broken).toBe(0)
})
