import { expect, it } from 'vitest'
import { runFleet } from '../support/fleet-load'

it('computes a fleet in the background and answers meanwhile; a set put into use shows soon after', { timeout: 180_000 }, async () => {
  const run = await runFleet({ spacecraft: 12, stations: 6 })
  expect(run).toMatchObject({ pairs: 72, failedJobs: 0 })
  expect(run.passes).toBeGreaterThan(12 * 6)
  expect(run.tables).toBe(run.passes)
  // Loose: the machine may have more to do. The full length holds the figures themselves.
  expect(run.liveP99Ms).toBeLessThan(500)
  expect(run.useToShownS).toBeLessThan(10)
})
