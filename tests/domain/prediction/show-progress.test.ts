import { sql } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import { requestRefresh } from '../../../server/domain/prediction/request-refresh'
import { showProgress } from '../../../server/domain/prediction/show-progress'
import { useTestDatabase } from '../../support/domain-test'
import { addSpacecraft, addStation } from '../../support/fixtures'
import { emptyQueue } from '../../support/queued-jobs'

// What a person is told of the work that waits: counts of the queue's own rows, common practice of work queues.
const test = useTestDatabase()
beforeEach(() => emptyQueue(test.db))

const finish = (count: number, ago: string) => test.db.execute(sql`
  UPDATE pgboss.job SET state = 'completed', started_on = now(), completed_on = now() - ${ago}::interval
  WHERE id IN (SELECT id FROM pgboss.job WHERE name = 'predict' AND state = 'created' LIMIT ${count})`)

describe('the progress of predictions', () => {
  it('is nothing of nothing while nothing waits', async () => {
    expect(await showProgress({ db: test.db })).toEqual({ left: 0, total: 0, finishedAt: null })
  })

  it('counts what waits and what has been finished since the oldest of it was asked for', async () => {
    for (let i = 0; i < 3; i++) await addStation(test.db)
    for (let i = 0; i < 2; i++) await addSpacecraft(test.db, new Date())
    await requestRefresh({ db: test.db }, { reason: 'a setting changed' })
    await finish(1, '3 hours')
    expect(await showProgress({ db: test.db })).toMatchObject({ left: 5, total: 5 })
    await finish(2, '-1 second')
    await test.db.execute(sql`UPDATE pgboss.job SET state = 'active', started_on = now() WHERE id IN (SELECT id FROM pgboss.job WHERE state = 'created' LIMIT 1)`)
    const { left, total, finishedAt } = await showProgress({ db: test.db })
    expect({ left, total }).toEqual({ left: 3, total: 5 })
    expect(finishedAt).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/)
    await finish(3, '-2 seconds')
    await test.db.execute(sql`UPDATE pgboss.job SET state = 'completed', completed_on = now() WHERE state = 'active'`)
    expect(await showProgress({ db: test.db })).toMatchObject({ left: 0, total: 0 })
  })
})
