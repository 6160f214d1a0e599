import { expect, it } from 'vitest'
import { runUpload } from '../support/upload-load'

it('200,000 sets in 50 MB are stored with bounded memory while other requests are answered', { timeout: 600_000 }, async () => {
  const run = await runUpload({ count: 200_000, nameLength: 118 })
  console.info(JSON.stringify(run))
  expect(run).toMatchObject({ status: 202, state: 'finished', accepted: 200_000 })
  expect(run.bytes).toBeGreaterThan(50_000_000)
  expect(run.growthMb).toBeLessThanOrEqual(300)
  expect(run.otherP99Ms).toBeLessThanOrEqual(500)
})
