import { expect, it } from 'vitest'
import { runSeed, seededRandom } from '../support/random'
import { fuzzUploads } from '../support/upload-fuzz'
import { killUploads } from '../support/upload-kills'
import { runUpload } from '../support/upload-load'

it('200,000 sets in 50 MB are stored with bounded memory while other requests are answered', { timeout: 600_000 }, async () => {
  const run = await runUpload({ count: 200_000, nameLength: 118 })
  console.info(JSON.stringify(run))
  expect(run).toMatchObject({ status: 202, state: 'finished', accepted: 200_000 })
  expect(run.bytes).toBeGreaterThan(50_000_000)
  expect(run.growthMb).toBeLessThanOrEqual(300)
  expect(run.otherP99Ms).toBeLessThanOrEqual(500)
})

it('10,000 malformed uploads get no 500, each an answer within a second that names lines', { timeout: 3600_000 }, async () => {
  const run = await fuzzUploads(10_000, runSeed())
  console.info(JSON.stringify({ ...run, faults: run.faults.length }))
  expect(run.faults).toEqual([])
})

it('a server killed 50 times during uploads leaves all of each or none, and what it had answered is kept', { timeout: 3600_000 }, async () => {
  const killed = await killUploads(50, seededRandom(runSeed()))
  console.info(JSON.stringify({ kills: killed.length, answered: killed.filter(one => one.answered !== null).length }))
  for (const { partial, keptOfAnswered, heldInTheEnd, count, ...one } of killed) {
    expect({ partial, kept: keptOfAnswered ?? count, heldInTheEnd }, JSON.stringify(one)).toEqual({ partial: 0, kept: count, heldInTheEnd: count })
  }
})
