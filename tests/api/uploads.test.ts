import { expect, it } from 'vitest'
import { runUpload } from '../support/upload-load'

it('20,000 sets are accepted within 2 s and stored within a minute, with bounded memory, and keep nobody waiting', async () => {
  const run = await runUpload({ count: 20_000 })
  console.info(JSON.stringify(run))
  expect(run).toMatchObject({ status: 202, state: 'finished', accepted: 20_000 })
  expect(run.acceptedMs).toBeLessThanOrEqual(2000)
  expect(run.doneMs).toBeLessThanOrEqual(60_000)
  expect(run.growthMb).toBeLessThanOrEqual(300)
  expect(run.otherP99Ms).toBeLessThanOrEqual(500)
  expect(run.others).toBeGreaterThan(20)
})
