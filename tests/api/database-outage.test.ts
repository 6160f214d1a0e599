import { describe, expect, it } from 'vitest'
import { freezeDatabase, stopDatabaseHard } from '../support/database-outage'

describe('while the database is away', { timeout: 180_000 }, () => {
  it('stopped hard twice under load, what was acknowledged is kept, only 503 is answered, and the server is ready within 10 s', async () => {
    const figures = await stopDatabaseHard(2)
    console.info(figures)
    expect(figures).toMatchObject({ lost: 0 })
    expect(figures.acknowledged).toBeGreaterThan(5)
    expect(figures.slowestRecoveryS).toBeLessThan(10)
    expect(Object.keys(figures.statuses).filter(status => !['200', '201', '503'].includes(status))).toEqual([])
    expect(figures.statuses['503']).toBeGreaterThan(0)
  })

  it('frozen for 12 s, every request is answered within 5 s, and the server is ready soon after', async () => {
    const figures = await freezeDatabase(12)
    console.info(figures)
    expect(figures.slowestAnswerS).toBeLessThan(5)
    expect(figures.recoveryS).toBeLessThan(10)
    expect(figures.memoryGrowthMb).toBeLessThan(100)
    expect(Object.keys(figures.statuses).filter(status => !['200', '201', '503'].includes(status))).toEqual([])
    expect(figures.statuses['503']).toBeGreaterThan(0)
  })
})
