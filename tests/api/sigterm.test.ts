import { expect, it } from 'vitest'
import { stopUnderLoad } from '../support/stop-under-load'

it('a server that is asked to stop under load ends within ten seconds, answers what it has begun and gives its jobs back', { timeout: 180_000 }, async () => {
  const figures = await stopUnderLoad()
  console.info(figures)
  expect(figures.exitCode).toBe(0)
  expect(figures.secondsToEnd).toBeLessThan(10)
})
