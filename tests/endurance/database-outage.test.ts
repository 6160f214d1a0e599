import { expect, it } from 'vitest'
import { freezeDatabase, stopDatabaseHard } from '../support/database-outage'

it('a database stopped hard ten times under load loses nothing acknowledged; the server answers only 503 meanwhile and is ready within 10 s', async () => {
  const figures = await stopDatabaseHard(10)
  console.info(figures)
  expect(figures).toMatchObject({ lost: 0 })
  expect(figures.slowestRecoveryS).toBeLessThan(10)
  expect(Object.keys(figures.statuses).filter(status => !['200', '201', '503'].includes(status))).toEqual([])
})

it('a database frozen for 30 s makes requests fail within 5 s and the server’s memory does not grow', async () => {
  const figures = await freezeDatabase(30)
  console.info(figures)
  expect(figures.slowestAnswerS).toBeLessThan(5)
  expect(figures.memoryGrowthMb).toBeLessThan(100)
  expect(Object.keys(figures.statuses).filter(status => !['200', '201', '503'].includes(status))).toEqual([])
})
