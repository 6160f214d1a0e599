import { createHash, createPublicKey, verify } from 'node:crypto'
import { eq } from 'drizzle-orm'
import { beforeAll, describe, expect, it } from 'vitest'
import { audit, signingKeys, tableRevisions } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { scheduleActor } from '~~/server/domain/context'
import { readFeedTable } from '~~/server/domain/station/read-feed-table'
import { readKeys } from '~~/server/domain/station/read-keys'
import { publishRevision } from '~~/server/domain/tables/publish-revision'
import { rotateSigningKey } from '~~/server/domain/tables/rotate-signing-key'
import { showSigningKeys } from '~~/server/domain/tables/show-signing-keys'
import { useTestDatabase } from '../../support/domain-test'
import type { SpacecraftFixture, StationFixture } from '../../support/fixtures'
import { addActor, addPass, addSpacecraft, addStation, addTable, presentDigest } from '../../support/fixtures'

const test = useTestDatabase()
const day = 86_400_000
const now = new Date('2026-12-01T12:00:00.000Z')
let administrator: PersonActor
let craft: SpacecraftFixture
let station: StationFixture
const at = (days: number) => ({ db: test.db, now: new Date(now.getTime() + days * day), actor: administrator })
beforeAll(async () => {
  administrator = await addActor(test.db, ['administrator'])
  craft = await addSpacecraft(test.db, now)
  station = await addStation(test.db)
})

let passes = 0
async function publish(days: number): Promise<string> {
  const deps = { ...at(days), actor: scheduleActor }
  const pass = await addPass(test.db, craft, station, new Date(deps.now.getTime() + ++passes * 7200_000))
  const table = await addTable(test.db, craft, station, pass, { state: 'approved', inputsDigest: await presentDigest(test.db, deps.now, craft, station) })
  expect(await publishRevision(deps, { tableId: table.id, mover: 'schedule' })).toMatchObject({ outcome: 'published' })
  return table.id
}
const kids = async (days: number) => (await readKeys(at(days))).keys.map(({ kid }) => kid)

/** By Node's own crypto (RFC 8037), with the key that the signature's header names. */
async function verifies(tableId: string, days: number): Promise<boolean> {
  const { revisionId, digest, signature } = await readFeedTable({ db: test.db }, { stationId: station.id, tableId })
  const [row] = await test.db.select({ canonical: tableRevisions.canonical }).from(tableRevisions).where(eq(tableRevisions.id, revisionId))
  const [header, , mark] = signature.split('.') as [string, string, string]
  const { kid } = JSON.parse(Buffer.from(header, 'base64url').toString()) as { kid: string }
  const jwk = (await readKeys(at(days))).keys.find(key => key.kid === kid)
  const bytes = Buffer.from(row!.canonical!)
  return jwk !== undefined && createHash('sha256').update(bytes).digest('hex') === digest
    && verify(null, Buffer.from(`${header}.${bytes.toString('base64url')}`), createPublicKey({ key: jwk, format: 'jwk' }), Buffer.from(mark, 'base64url'))
}

describe('a new signing key', () => {
  it('signs from then on, while what the former one signed still verifies, for 90 days after its last table', async () => {
    const before = await publish(0)
    const [first] = await kids(0)
    const made = await rotateSigningKey(at(1))
    const after = await publish(2)
    expect(await kids(2)).toEqual([made.kid, first])
    expect([await verifies(before, 2), await verifies(after, 2)]).toEqual([true, true])
    expect(await kids(89)).toEqual([made.kid, first])
    expect(await kids(91)).toEqual([made.kid])
    // The one that signs is given however long it has signed nothing.
    expect(await kids(400)).toEqual([made.kid])
    expect((await showSigningKeys(at(91))).items).toMatchObject([{ kid: made.kid, retiredAt: null, served: true, lastSignedAt: at(2).now.toISOString() }, { kid: first, retiredAt: at(1).now.toISOString(), served: false, lastSignedAt: null }])
  })

  it('leaves one that signed nothing out at once, and is in the trail without any private half', async () => {
    const unused = await rotateSigningKey(at(3))
    const next = await rotateSigningKey(at(4))
    expect(await kids(4)).toContain(next.kid)
    expect(await kids(4)).not.toContain(unused.kid)
    const [entry] = await test.db.select().from(audit).where(eq(audit.entityId, next.kid))
    expect(entry).toMatchObject({ action: 'signing-key.make', actorName: administrator.name, before: { kid: unused.kid }, after: { kid: next.kid } })
    const secrets = (await test.db.select().from(signingKeys)).map(({ privateJwk }) => privateJwk.d!)
    const told = JSON.stringify([await test.db.select().from(audit), await readKeys(at(4)), await showSigningKeys(at(4))])
    for (const secret of secrets) expect(told).not.toContain(secret)
  })

  it('made twice at once leaves one that signs, and a publication beside it is signed by one of them', async () => {
    const [published] = await Promise.all([publish(5), rotateSigningKey(at(5)), rotateSigningKey(at(5))])
    expect(await test.db.$count(signingKeys, eq(signingKeys.active, true))).toBe(1)
    expect(await verifies(published, 5)).toBe(true)
    expect(await test.db.$count(tableRevisions, eq(tableRevisions.tableId, published))).toBe(1)
  })
})
