import { expect, it } from 'vitest'
import { runFeedLoad } from '../support/feed-load'

/** Short, on a machine that does other things: ratio and errors are held, the times are told. Ten minutes and the times: `npm run endurance`. */
it('200 station polls a second by tag: nearly all are told in few bytes that nothing has changed, and none fails', { timeout: 120_000 }, async () => {
  const run = await runFeedLoad({ pollsPerS: 200, seconds: 12 })
  console.info(`feed: ${JSON.stringify(run)}`)
  expect(run.polls).toBeGreaterThan(2300)
  expect(Object.keys(run.statuses).sort()).toEqual(['200', '304'])
  expect(run.notModifiedShare).toBeGreaterThanOrEqual(0.95)
  expect(run.publications).toBeGreaterThan(5)
  expect(run.broken).toBe(0)
})
