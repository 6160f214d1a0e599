import { asc, eq, sql } from 'drizzle-orm'
import { expect, it } from 'vitest'
import { passes, tableRevisions, tables, webHookDeliveries, webHooks } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { publishRevision } from '~~/server/domain/tables/publish-revision'
import { withdrawTable } from '~~/server/domain/tables/withdraw-table'
import { useTestDatabase } from '../../support/domain-test'
import { queuedJobs } from '../../support/queued-jobs'
import { addSet, ahead, createFleet, createPerson, referenceElements, useSet, windowStart as now } from '../prediction/fleet'

const test = useTestDatabase()

it('web hooks are told of a publication, of what it supersedes and of a withdrawal, each in the transaction that does it', async () => {
  const { db } = test
  const operator: PersonActor = await createPerson(db, 'Ada', ['operator'])
  const fleet = await createFleet(db)
  const predict = (reason: string) => predictStation({ db, now }, { ...fleet, reason })
  await predict('A test asks.')
  await db.insert(webHooks).values({ name: 'All', url: 'https://ops.example/', secret: 'whsec_c2VjcmV0', events: ['table.published', 'table.superseded', 'table.withdrawn'], createdBy: 'Test' })
  const [first] = await db.select({ id: tables.id, passId: tables.passId, aos: passes.aos }).from(tables).innerJoin(passes, eq(passes.id, tables.passId)).where(eq(tables.linkId, fleet.downlinkId)).orderBy(asc(passes.aos)).limit(1)
  const publish = (tx = db) => publishRevision({ db: tx, actor: operator, now }, { tableId: first!.id, mover: 'person' })
  const told = async () => (await db.select().from(webHookDeliveries).orderBy(sql`ctid`)).map(({ body }) => JSON.parse(body) as { type: string, data: Record<string, unknown> })

  await db.transaction(async (tx) => {
    await publish(tx)
    throw new Error('undone')
  }).catch(() => {})
  expect(await told()).toEqual([])

  await publish()
  const [published] = await db.select().from(tableRevisions).where(eq(tableRevisions.tableId, first!.id))
  expect(await told()).toMatchObject([{ type: 'table.published', data: { tableId: first!.id, revision: 1, verdict: 'holds', digest: published!.digest, supersedes: null, passId: first!.passId, aos: first!.aos.toISOString(), link: { id: fleet.downlinkId, direction: 'downlink' }, station: { id: fleet.stationId }, publishedBy: 'Ada', address: expect.stringMatching(new RegExp(`^https?://.+/passes/${first!.passId}$`)) } }])

  await useSet(db, fleet.spacecraftId, await addSet(db, fleet.spacecraftId, ahead(referenceElements('SSO500'), 10)))
  await predict('New elements.')
  await publish()
  expect((await told()).slice(1)).toMatchObject([{ type: 'table.superseded', data: { revision: 1, by: 2, reason: expect.stringMatching(/Hz: New elements/) } }, { type: 'table.published', data: { revision: 2, supersedes: 1 } }])

  await withdrawTable({ db, actor: operator, now }, { id: first!.id, reason: 'A wrong station.' })
  expect((await told()).at(-1)).toMatchObject({ type: 'table.withdrawn', data: { revision: 2, reason: 'A wrong station.', withdrawnBy: 'Ada' } })
  expect(await queuedJobs(db, 'web-hook')).toHaveLength(4)
})
