import { eq } from 'drizzle-orm'
import { beforeEach, describe, expect, it } from 'vitest'
import type { Database } from '../../../server/database/client'
import { openDatabase } from '../../../server/database/client'
import { idempotencyKeys, mails, settings, slots } from '../../../server/database/schema'
import { wake } from '../../../server/domain/schedule/wake'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import { addPass, addPerson, addSpacecraft, addStation, addTable } from '../../support/fixtures'
import { queuedJobs } from '../../support/queued-jobs'

let test: TestDatabase
let database: Database
const createdAt = new Date('2026-11-01T00:00:00Z')

beforeEach(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  await database.db.insert(settings).values([{ key: 'digestZone', value: 'Europe/Oslo' }, { key: 'digestAt', value: '19:30' }])
  return async () => {
    await database.close()
    await test.drop()
  }
})

const wakeAt = (instant: string) => wake({ db: database.db, now: new Date(instant) }, { withAlerts: false, onError: (_part, error) => { throw error } })
const digests = async () => database.db.select().from(mails).where(eq(mails.kind, 'digest')).orderBy(mails.toName)
const outcomes = async () => (await database.db.select().from(slots).where(eq(slots.kind, 'digest'))).map(({ outcome }) => outcome)

describe('the night’s digest', () => {
  it('goes once to every operator and to flight dynamics at the night’s start, with the night’s passes and decisions', async () => {
    await addPerson(database.db, ['operator', 'flight-dynamics'], { name: 'Both', createdAt, zone: 'America/New_York' })
    await addPerson(database.db, ['flight-dynamics'], { name: 'Fly', createdAt })
    await addPerson(database.db, ['on-call', 'administrator', 'reader'], { name: 'Other', createdAt })
    await addPerson(database.db, ['operator'], { name: 'Gone', createdAt, disabledAt: createdAt })
    const craft = await addSpacecraft(database.db, createdAt, { name: 'Gannet' })
    const station = await addStation(database.db, { name: 'North Cove', createdAt })
    for (const [aos, given] of [['2026-12-01T18:29:59Z', {}], ['2026-12-01T19:00:00Z', { margin: 1.1 }], ['2026-12-02T06:29:00Z', { state: 'approved' as const }], ['2026-12-02T06:30:00Z', {}]] as const) {
      await addTable(database.db, craft, station, await addPass(database.db, craft, station, new Date(aos)), given)
    }
    await wakeAt('2026-12-01T18:29:59Z')
    expect(await digests()).toEqual([])
    await wakeAt('2026-12-01T18:30:00Z')
    await wakeAt('2026-12-01T18:30:05Z')
    const sent = await digests()
    expect(sent.map(({ toName }) => toName)).toEqual(['Both', 'Fly'])
    expect(sent[0]).toMatchObject({ subject: 'Tonight: 2 passes, 1 decision due', text: expect.stringContaining('2: 1 hold, 1 tight, 0 break') })
    expect(sent[0]!.text).toContain('- 2026-12-01 19:00:00 UTC to 19:10:00 UTC Gannet at North Cove, 1 table')
    expect(sent[0]!.text).toContain('2026-12-01 13:30 (UTC\u221205:00)')
    expect(await queuedJobs(database.db, 'mail')).toHaveLength(2)
    expect((await outcomes()).filter(outcome => !outcome.startsWith('Missed'))).toEqual(['Mailed to 2 people, on time.'])
  })

  it('is sent once by two servers, late within the night, and not at all when the night is over', async () => {
    await addPerson(database.db, ['operator'], { createdAt })
    const other = openDatabase(test.url)
    await Promise.all([database.db, other.db, database.db].map(db => wake({ db, now: new Date('2026-12-01T20:00:00Z') }, { withAlerts: false, onError: (_part, error) => { throw error } })))
    await other.close()
    expect(await digests()).toHaveLength(1)
    expect(await outcomes()).toEqual(['Mailed to 1 person, 1 h 30 min late.'])
    await wakeAt('2026-12-03T06:30:00Z')
    expect(await digests()).toHaveLength(1)
    expect((await outcomes())[1]).toMatch(/^Missed: found 12 h 0 min late/)
  })

  it('is not owed for a night that began before anybody was there', async () => {
    await addPerson(database.db, ['operator'], { createdAt: new Date('2026-12-01T19:00:00Z') })
    await wakeAt('2026-12-01T20:00:00Z')
    expect(await digests()).toEqual([])
  })
})

describe('rolling forward', () => {
  it('asks once an hour for the prediction of each spacecraft at each station and sweeps out old keys', async () => {
    await addSpacecraft(database.db, createdAt)
    await addStation(database.db, { createdAt })
    await addStation(database.db, { createdAt })
    await database.db.insert(idempotencyKeys).values([{ actor: 'a', key: 'old', route: 'r', bodySha256: 'x', createdAt: new Date('2026-11-30T09:00:00Z') }, { actor: 'a', key: 'new', route: 'r', bodySha256: 'x', createdAt: new Date('2026-12-01T09:00:00Z') }])
    await wakeAt('2026-12-01T10:00:07Z')
    await wakeAt('2026-12-01T10:59:59Z')
    expect(await queuedJobs(database.db, 'predict')).toHaveLength(2)
    expect((await database.db.select().from(idempotencyKeys)).map(({ key }) => key)).toEqual(['new'])
    await wakeAt('2026-12-01T11:00:00Z')
    expect((await database.db.select().from(slots).where(eq(slots.kind, 'roll-forward'))).map(({ outcome }) => outcome)).toEqual(['Asked for 2 predictions.', 'Asked for 2 predictions.'])
  })
})
