import { expect, it } from 'vitest'
import { runFleet } from '../support/fleet-load'

it('1,000 spacecraft over 20 stations for 72 hours: memory stays bounded and the server answers all the while', { timeout: 6 * 3600_000 }, async () => {
  const run = await runFleet({ spacecraft: 1000, stations: 20 })
  console.info(JSON.stringify(run))
  expect(run).toMatchObject({ pairs: 20_000, failedJobs: 0 })
  expect(run.liveP99Ms).toBeLessThanOrEqual(100)
  expect(run.largestMb).toBeLessThanOrEqual(600)
})

it('a set put into use shows at six stations within two seconds', { timeout: 600_000 }, async () => {
  const run = await runFleet({ spacecraft: 8, stations: 6 })
  console.info(JSON.stringify(run))
  expect(run.useToShownS).toBeLessThanOrEqual(2)
})
