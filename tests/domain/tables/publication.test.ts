import { createHash, createPublicKey, verify } from 'node:crypto'
import { and, asc, eq } from 'drizzle-orm'
import { flattenedVerify, importJWK } from 'jose'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { publishedTableSchema } from '#shared/formats/published-table'
import type { Database } from '~~/server/database/client'
import { openDatabase } from '~~/server/database/client'
import { links, passes, signingKeys, tableRevisions, tables } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import { publishRevision } from '~~/server/domain/tables/publish-revision'
import { ensureSigningKey } from '~~/server/domain/tables/signing-key'
import { withdrawTable } from '~~/server/domain/tables/withdraw-table'
import type { TestDatabase } from '../../support/database'
import { createTestDatabase } from '../../support/database'
import type { Fleet } from '../prediction/fleet'
import { addSet, ahead, createFleet, createPerson, referenceElements, useSet, windowStart } from '../prediction/fleet'

let test: TestDatabase
let database: Database
let fleet: Fleet
let operator: PersonActor
const now = windowStart

beforeAll(async () => {
  test = await createTestDatabase()
  database = openDatabase(test.url)
  operator = await createPerson(database.db, 'Ada', ['operator'])
})
afterAll(async () => {
  await database.close()
  await test.drop()
})
beforeEach(async () => {
  fleet = await createFleet(database.db)
  await predict('A test asks.')
})

const predict = (reason: string) => predictStation({ db: database.db, now }, { ...fleet, reason })
const publish = (tableId: string) => publishRevision({ db: database.db, actor: operator, now }, { tableId, mover: 'person' })
async function firstDownlink() {
  const [row] = await database.db.select({ id: tables.id }).from(tables).innerJoin(passes, eq(passes.id, tables.passId)).where(eq(tables.linkId, fleet.downlinkId)).orderBy(asc(passes.aos)).limit(1)
  return row!.id
}
const revisions = (tableId: string) => database.db.select().from(tableRevisions).where(eq(tableRevisions.tableId, tableId)).orderBy(asc(tableRevisions.number))
async function useShifted(seconds: number, reason: string) {
  await useSet(database.db, fleet.spacecraftId, await addSet(database.db, fleet.spacecraftId, ahead(referenceElements('SSO500'), seconds)))
  return predict(reason)
}

describe('publication', () => {
  it('signs what goes out so that other programs verify it, and one changed byte does not verify', async () => {
    const id = await firstDownlink()
    await publish(id)
    const [row] = await revisions(id)
    const table = publishedTableSchema.parse(JSON.parse(row!.canonical!))
    expect(table).toMatchObject({ id, revision: 1, publishedAt: now.toISOString(), supersedes: null, verdict: 'holds' })

    // RFC 6234 by Node’s own crypto; RFC 7515 appendix F by jose, RFC 8037 once more by Node alone.
    const bytes = Buffer.from(row!.canonical!, 'utf8')
    expect(row!.digest).toBe(createHash('sha256').update(bytes).digest('hex'))
    const [header, empty, signature] = row!.signature!.split('.') as [string, string, string]
    expect(empty).toBe('')
    const [key] = await database.db.select().from(signingKeys)
    const jwk = await importJWK(key!.publicJwk, 'EdDSA')
    const jws = (payload: Buffer) => ({ protected: header, payload: payload.toString('base64url'), signature })
    const verified = await flattenedVerify(jws(bytes), jwk)
    expect(verified.protectedHeader).toEqual({ alg: 'EdDSA', kid: key!.kid })
    const input = Buffer.from(`${header}.${bytes.toString('base64url')}`)
    expect(verify(null, input, createPublicKey({ key: key!.publicJwk, format: 'jwk' }), Buffer.from(signature, 'base64url'))).toBe(true)
    const forged = Buffer.from(row!.canonical!.replace('"revision":1', '"revision":2'))
    await expect(flattenedVerify(jws(forged), jwk)).rejects.toThrow(/signature/)
  })

  it('has one signing key, however many servers ask for it first', async () => {
    const keys = await Promise.all(Array.from({ length: 5 }, () => ensureSigningKey({ db: database.db, now })))
    expect(new Set(keys.map(key => key.kid)).size).toBe(1)
    expect(keys[0]!.publicJwk).not.toHaveProperty('d')
  })

  it('of two publications at once one succeeds', async () => {
    const id = await firstDownlink()
    const outcomes = await Promise.all([publish(id), publish(id)])
    expect(outcomes.map(({ outcome }) => outcome).sort()).toEqual(['nothing-open', 'published'])
  })

  it('the database itself refuses a change of published rows, digest or signature', async () => {
    const id = await firstDownlink()
    await publish(id)
    const [row] = await revisions(id)
    for (const change of [{ retunes: row!.retunes.slice(1) }, { digest: '0'.repeat(64) }, { signature: 'x..y' }, { verdict: 'tight' as const }, { publishedAt: new Date(0) }]) {
      await expect(database.db.update(tableRevisions).set(change).where(eq(tableRevisions.id, row!.id))).rejects.toMatchObject({ cause: { message: expect.stringMatching(/never changed/) } })
    }
  })

  it('a set that moves the rows drafts a newer revision that says by how many hertz, carries the approval and supersedes when published', async () => {
    const id = await firstDownlink()
    await publish(id)
    // The spacecraft 10 s ahead: at up to 159 Hz/s (mechanics, 500 km, 437 MHz) far more than a fifth of the allowance.
    const outcome = await useShifted(10, 'New elements.')
    expect(outcome.rechecks.find(recheck => recheck.tableId === id)).toMatchObject({ revision: 1, gone: null })
    const [first, second] = await revisions(id)
    expect(first).toMatchObject({ number: 1, state: 'published' })
    expect(second).toMatchObject({ number: 2, state: 'approved', verdict: 'holds', reason: expect.stringMatching(/moves by [\d.]+ Hz: New elements\.$/) })

    expect(await publish(id)).toMatchObject({ outcome: 'published', revision: 2, supersedes: 1 })
    const [old, current] = await revisions(id)
    expect(old).toMatchObject({ state: 'superseded', reason: second!.reason, supersededAt: now })
    expect(JSON.parse(current!.canonical!).supersedes).toEqual({ revision: 1, reason: second!.reason })
  })

  it('a set that moves the rows by less than a fifth of the allowance leaves what is published alone', async () => {
    // An allowance wider than the whole Doppler curve (10.4 kHz, mechanics) leaves a margin that no small move uses up.
    await database.db.update(links).set({ symbolRateHz: 100_000 }).where(eq(links.id, fleet.downlinkId))
    await predict('A faster link.')
    const id = await firstDownlink()
    await publish(id)
    // 0.2 s ahead: at most 32 Hz of the allowance’s 18.6 kHz.
    await useShifted(0.2, 'New elements.')
    expect((await revisions(id)).map(({ number, state }) => [number, state])).toEqual([[1, 'published']])
  })

  it('a newer revision that nobody published yet is recomputed, not followed by another', async () => {
    const id = await firstDownlink()
    await publish(id)
    await useShifted(10, 'New elements.')
    await useShifted(20, 'Newer elements.')
    const rows = await revisions(id)
    expect(rows.map(({ number, state }) => [number, state])).toEqual([[1, 'published'], [2, 'approved']])
    expect(rows[1]!.reason).toMatch(/Newer elements\.$/)
  })

  it('a withdrawn table is drafted anew only when its inputs change, and then waits for a person', async () => {
    const id = await firstDownlink()
    await publish(id)
    await withdrawTable({ db: database.db, actor: operator, now }, { id, reason: 'Wrong antenna.' })
    await predict('Rolled forward.')
    expect(await revisions(id)).toHaveLength(1)
    await useShifted(10, 'New elements.')
    expect((await revisions(id)).map(({ number, state }) => [number, state])).toEqual([[1, 'withdrawn'], [2, 'drafted']])
  })

  it('a published table whose pass vanishes stays with the station and is reported', async () => {
    const id = await firstDownlink()
    await publish(id)
    const [pass] = await database.db.select({ id: tables.passId }).from(tables).where(eq(tables.id, id))
    await useShifted(2700, 'Someone else’s object.')
    const outcome = await predict('Rolled forward.')
    const [row] = await database.db.select().from(passes).where(eq(passes.id, pass!.id))
    expect(row!.goneAt).toEqual(now)
    expect(outcome.rechecks.find(recheck => recheck.tableId === id)).toMatchObject({ verdict: null, gone: expect.stringContaining('no longer predicted') })
    const [published] = await database.db.select().from(tableRevisions).where(and(eq(tableRevisions.tableId, id), eq(tableRevisions.number, 1)))
    expect(published!.state).toBe('published')
  })
})
