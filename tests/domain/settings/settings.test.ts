import { and, eq } from 'drizzle-orm'
import { beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { changeSettingsBody } from '#shared/schemas/settings'
import { audit, settings } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { changeSettings } from '~~/server/domain/settings/change-settings'
import { readSettings } from '~~/server/domain/settings/read-settings'
import { ut1InForce } from '~~/server/domain/settings/ut1-in-force'
import { useTestDatabase } from '../../support/domain-test'
import { addActor, addSpacecraft, addStation } from '../../support/fixtures'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let actor: PersonActor
const change = (body: object) => changeSettings({ db: test.db, actor, now }, changeSettingsBody.parse(body))
beforeAll(async () => {
  actor = await addActor(test.db, ['administrator'])
  await addSpacecraft(test.db, now)
  await addStation(test.db)
})
beforeEach(() => emptyQueue(test.db))

describe('settings', () => {
  it('stand at their defaults until somebody sets them, and keep the rest when one is changed', async () => {
    expect(await readSettings(test.db)).toMatchObject({ organisation: 'Nullbeat', horizonDays: 7, ut1: null, k: 2, digestZone: 'UTC', digestAt: '18:00' })
    await change({ horizonDays: 5 })
    const { settings: after } = await change({ organisation: 'Tern Bay' })
    expect(after).toMatchObject({ organisation: 'Tern Bay', horizonDays: 5, k: 2 })
    expect(await readSettings(test.db)).toEqual(after)
  })

  it('can be set back to nothing', async () => {
    await change({ ut1: { ut1MinusUtcS: 0.1, validUntil: '2027-01-01T00:00:00Z' } })
    expect((await readSettings(test.db)).ut1).toEqual({ ut1MinusUtcS: 0.1, validUntil: '2027-01-01T00:00:00.000Z' })
    await change({ ut1: null })
    expect((await readSettings(test.db)).ut1).toBeNull()
  })

  it('leave rows alone that are no setting of a person’s', async () => {
    await test.db.insert(settings).values({ key: 'demoLoaded', value: 'yes' })
    expect(Object.keys(await readSettings(test.db))).not.toContain('demoLoaded')
  })

  it.each([
    ['the horizon', { horizonDays: 9 }, 1], ['UT1', { ut1: { ut1MinusUtcS: -0.2, validUntil: '2027-02-01T00:00:00Z' } }, 1], ['how often spreads count', { k: 3 }, 1],
    ['the prior', { prior: { lowFloorKm: 1, lowGrowthKmPerDay: 2, highFloorKm: 0.3, highGrowthKmPerDay: 0.5 } }, 1], ['the name', { organisation: 'Elsewhere' }, 0], ['the digest', { digestAt: '19:30', digestZone: 'Europe/Oslo' }, 0],
  ])('ask for every table anew when %s changes, if tables depend on it', async (_, body, jobs) => {
    await change(body)
    expect(await queuedJobs(test.db, 'predict')).toHaveLength(jobs)
    await emptyQueue(test.db)
    await change(body)
    expect(await queuedJobs(test.db, 'predict')).toEqual([])
  })

  it('write before and after to the trail, and nothing when nothing changes', async () => {
    await change({ k: 2.5 })
    await change({ k: 2.5 })
    const rows = await test.db.select().from(audit).where(and(eq(audit.entityKind, 'settings'), eq(audit.actorId, actor.id)))
    expect(rows.filter(row => (row.after as { k?: number }).k === 2.5)).toEqual([expect.objectContaining({ action: 'settings.change', before: { k: 3 }, after: { k: 2.5 } })])
  })
})

describe('UT1 − UTC', () => {
  // Bounds: ITU-R TF.460 keeps |UT1 − UTC| under 0.9 s.
  const ut1 = { ut1MinusUtcS: 0.0123, validUntil: '2026-12-01T12:00:00.000Z' }
  it('is in force until the day it is valid to, and counts as unset from then on', () => {
    expect(ut1InForce({ ut1 }, new Date('2026-12-01T11:59:59.999Z'))).toEqual({ ut1MinusUtcS: 0.0123, boundS: 0.05 })
    expect(ut1InForce({ ut1 }, now)).toEqual({ ut1MinusUtcS: 0, boundS: 0.9 })
    expect(ut1InForce({ ut1: null }, now)).toEqual({ ut1MinusUtcS: 0, boundS: 0.9 })
  })
})
