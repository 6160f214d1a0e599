import { createHash } from 'node:crypto'
import { eq } from 'drizzle-orm'
import { beforeAll, describe, expect, it } from 'vitest'
import { apiKeys, audit, stations } from '~~/server/database/schema'
import { findKey } from '~~/server/domain/auth/find-key'
import type { PersonActor } from '~~/server/domain/context'
import { createKey } from '~~/server/domain/keys/create-key'
import { listKeys } from '~~/server/domain/keys/read-keys'
import { revokeKey } from '~~/server/domain/keys/revoke-key'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { addActor, addStation } from '../../support/fixtures'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let actor: PersonActor
const deps = () => ({ db: test.db, actor, now })
const actorOf = async (key: string) => (await findKey({ db: test.db }, key))?.actor ?? null
const stationKey = (stationId: string, name = 'Controller') => createKey(deps(), { name, scope: 'station', stationId })
beforeAll(async () => {
  actor = await addActor(test.db, ['administrator'])
})

describe('a key', () => {
  it('is shown once, works, and is kept as its SHA-256 alone', async () => {
    const { id, key, prefix } = await createKey(deps(), { name: 'Ground software', scope: 'read', stationId: null })
    expect(key).toMatch(/^nb_[A-Za-z0-9]{40}$/)
    expect(prefix).toBe(key.slice(0, 11))
    expect(await actorOf(key)).toMatchObject({ kind: 'key', id, name: 'Ground software', scope: 'read', stationId: null })
    const [row] = await test.db.select().from(apiKeys).where(eq(apiKeys.id, id))
    expect(row!.keyHash).toBe(createHash('sha256').update(key).digest('hex'))
    expect(JSON.stringify([row, await test.db.select().from(audit), await listKeys(deps(), { limit: 1000 })])).not.toContain(key.slice(11))
  })

  it('does not work with one sign changed', async () => {
    const { key } = await createKey(deps(), { name: 'K', scope: 'metrics', stationId: null })
    const last = key.at(-1) === 'A' ? 'B' : 'A'
    expect(await actorOf(key.slice(0, -1) + last)).toBeNull()
  })

  it('uses every sign about equally often', async () => {
    const keys = await Promise.all(Array.from({ length: 40 }, (_, n) => createKey(deps(), { name: `K${n}`, scope: 'read', stationId: null })))
    const counts = new Map<string, number>()
    for (const sign of keys.flatMap(({ key }) => [...key.slice(3)])) counts.set(sign, (counts.get(sign) ?? 0) + 1)
    // 1600 draws of 62: chi-square with 61 degrees of freedom is beyond 137 once in ten million (tables of the distribution).
    const expected = 1600 / 62
    const chiSquare = [...'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789'].reduce((sum, sign) => sum + ((counts.get(sign) ?? 0) - expected) ** 2 / expected, 0)
    expect(chiSquare).toBeLessThan(137)
  })

  it('stops working once revoked, and revoking again changes nothing', async () => {
    const { id, key } = await createKey(deps(), { name: 'K', scope: 'read', stationId: null })
    await revokeKey(deps(), id)
    await revokeKey({ ...deps(), now: new Date(now.getTime() + 1000) }, id)
    expect(await actorOf(key)).toBeNull()
    expect((await listKeys(deps(), { limit: 1000 })).items.find(item => item.id === id)!.revokedAt).toBe(now.toISOString())
    expect(await refusalOf(revokeKey(deps(), actor.id))).toMatchObject({ code: 'not-found' })
  })
})

describe('a station’s keys', () => {
  it('are two at a time, so that it can change over', async () => {
    const station = await addStation(test.db)
    const first = await stationKey(station.id)
    await stationKey(station.id)
    expect(await refusalOf(stationKey(station.id))).toMatchObject({ code: 'conflict' })
    await revokeKey(deps(), first.id)
    expect(await stationKey(station.id)).toMatchObject({ stationId: station.id, stationName: station.name, scope: 'station' })
  })

  it('stay two when three are asked for at once', async () => {
    const station = await addStation(test.db)
    const asked = await Promise.allSettled([1, 2, 3].map(() => stationKey(station.id)))
    expect(asked.filter(result => result.status === 'fulfilled')).toHaveLength(2)
  })

  it('do not work once the station is retired, nor can one be made for it', async () => {
    const station = await addStation(test.db)
    const { key } = await stationKey(station.id)
    expect(await actorOf(key)).toMatchObject({ stationId: station.id })
    await test.db.update(stations).set({ retiredAt: now }).where(eq(stations.id, station.id))
    expect(await actorOf(key)).toBeNull()
    expect(await refusalOf(stationKey(station.id))).toMatchObject({ code: 'not-valid', paths: ['stationId'] })
  })
})

it('lists keys newest first, page by page', async () => {
  const first = await listKeys(deps(), { limit: 5 })
  const second = await listKeys(deps(), { limit: 1000, cursor: first.nextCursor! })
  expect(new Set([...first.items, ...second.items].map(item => item.id)).size).toBe(await test.db.$count(apiKeys))
})
