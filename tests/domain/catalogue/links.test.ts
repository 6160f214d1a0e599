import { and, desc, eq } from 'drizzle-orm'
import { beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { createLinkBody } from '#shared/schemas/links'
import { audit, links } from '~~/server/database/schema'
import { changeLink } from '~~/server/domain/catalogue/change-link'
import { createLink } from '~~/server/domain/catalogue/create-link'
import { getLink, listLinks } from '~~/server/domain/catalogue/read-links'
import { retireLink } from '~~/server/domain/catalogue/retire-link'
import { retireSpacecraft } from '~~/server/domain/catalogue/retire-spacecraft'
import type { PersonActor } from '~~/server/domain/context'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import type { SpacecraftFixture } from '../../support/fixtures'
import { addActor, addSpacecraft, addStation } from '../../support/fixtures'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let actor: PersonActor
let craft: SpacecraftFixture
const stationIds: string[] = []
const deps = () => ({ db: test.db, actor, now })
const body = (given: object = {}) => createLinkBody.parse({
  spacecraftId: craft.id, name: `Telemetry ${Math.random()}`, direction: 'downlink', carrierHz: 437.5e6, bandLowHz: 437.4e6, bandHighHz: 437.6e6, symbolRateHz: 9600, modulation: 'BPSK', detector: 'quadrature', ...given,
})
const lastAudit = async (entityId: string) => (await test.db.select().from(audit).where(and(eq(audit.entityKind, 'link'), eq(audit.entityId, entityId))).orderBy(desc(audit.id)).limit(1))[0]!

beforeAll(async () => {
  actor = await addActor(test.db, ['on-call'])
  craft = await addSpacecraft(test.db, now)
  stationIds.push((await addStation(test.db)).id, (await addStation(test.db)).id)
  await addStation(test.db, { retiredAt: now })
})
beforeEach(() => emptyQueue(test.db))

describe('creating a link', () => {
  it('says what it bears: 0.5 dB on quadrature at 9600 Bd is an offset of 0.186 symbol rates', async () => {
    // Worked by hand: 20·log10(sinc ε) = −0.5 where sin x/x = 10^(−0.5/20) = 0.94406; 1 − x²/6 + x⁴/120 gives x = 0.5844, ε = x/π = 0.1860.
    const link = await createLink(deps(), body())
    expect(link.allowanceHz / 9600).toBeCloseTo(0.1860, 3)
    expect(link).toMatchObject({ limitedBy: 'loss', symbolTimeS: 1 / 9600, spacecraftName: craft.name, retiredAt: null })
  })

  it('keeps the figures that each detector goes by, and says what it bears', async () => {
    // A quarter of the bandwidth (common practice); half-sine pulse 6.02 dB at half the bit rate; Pollet et al. 1995 exactly, 0.542 dB at a fiftieth and Es/N0 20 dB.
    const chirp = { detector: 'chirp', bandwidthHz: 125_000, spreadingFactor: 10, symbolRateHz: 125_000 / 1024 }
    expect(await createLink(deps(), body(chirp))).toMatchObject({ ...chirp, allowanceHz: 31_250, limitedBy: 'stated' })
    expect((await createLink(deps(), body({ detector: 'msk', permittedLossDb: 6.0206 }))).allowanceHz).toBeCloseTo(4800, 1)
    const many = await createLink(deps(), body({ detector: 'multicarrier', permittedLossDb: 0.5424, symbolRateHz: 15_000 }))
    expect(many.allowanceHz).toBeCloseTo(300, 0)
    expect(many.esN0Db).toBe(20)
  })

  it('refuses a chirp without its bandwidth and spreading factor, and turning a link into one', async () => {
    const refused = createLinkBody.safeParse({ ...body(), detector: 'chirp' })
    expect(refused.error?.issues.map(issue => issue.path[0])).toEqual(['bandwidthHz', 'spreadingFactor'])
    const link = await createLink(deps(), body())
    expect(await refusalOf(changeLink(deps(), link.id, { detector: 'chirp', bandwidthHz: 125_000 }))).toMatchObject({ code: 'not-valid', paths: ['spreadingFactor'] })
  })

  it('recomputes the tables and wants a reason where another detector or a lower Es/N0 bears more', async () => {
    // 0.5 dB: fsk 0.091 symbol rates, quadrature 0.186.
    const link = await createLink(deps(), body({ detector: 'fsk' }))
    expect(await refusalOf(changeLink(deps(), link.id, { detector: 'quadrature' }))).toMatchObject({ code: 'not-valid', paths: ['reason'] })
    const many = await createLink(deps(), body({ detector: 'multicarrier' }))
    expect(await refusalOf(changeLink(deps(), many.id, { esN0Db: 10 }))).toMatchObject({ code: 'not-valid', paths: ['reason'] })
    await emptyQueue(test.db)
    await changeLink(deps(), many.id, { esN0Db: 25 })
    expect((await queuedJobs(test.db, 'predict')).length).toBe(stationIds.length)
  })

  it('lets a downlink approve what holds and an uplink not, unless it is said', async () => {
    expect((await createLink(deps(), body())).approveWhatHolds).toBe(true)
    expect((await createLink(deps(), body({ direction: 'uplink' }))).approveWhatHolds).toBe(false)
    expect((await createLink(deps(), body({ direction: 'uplink', approveWhatHolds: true }))).approveWhatHolds).toBe(true)
  })

  it('asks for its spacecraft’s tables at every station in service, and at no other', async () => {
    await createLink(deps(), body())
    const jobs = await queuedJobs(test.db, 'predict')
    expect(jobs.map(job => job.stationId).sort()).toEqual([...stationIds].sort())
    expect(new Set(jobs.map(job => job.spacecraftId))).toEqual(new Set([craft.id]))
  })

  it('refuses a spacecraft that is not there or retired, and a name taken on the same spacecraft', async () => {
    expect(await refusalOf(createLink(deps(), body({ spacecraftId: actor.id })))).toMatchObject({ code: 'not-valid', paths: ['spacecraftId'] })
    const gone = await addSpacecraft(test.db, now, { retiredAt: now })
    expect(await refusalOf(createLink(deps(), body({ spacecraftId: gone.id })))).toMatchObject({ code: 'not-valid', paths: ['spacecraftId'] })
    await createLink(deps(), body({ name: 'Beacon' }))
    expect(await refusalOf(createLink(deps(), body({ name: 'BEACON' })))).toMatchObject({ code: 'conflict', paths: ['name'] })
  })
})

describe('changing a link', () => {
  it('runs the rules between fields on the link as it would stand', async () => {
    const link = await createLink(deps(), body())
    expect(await refusalOf(changeLink(deps(), link.id, { carrierHz: 145e6 }))).toMatchObject({ code: 'not-valid', paths: ['carrierHz'] })
    expect(await refusalOf(changeLink(deps(), link.id, { detector: 'stated' }))).toMatchObject({ code: 'not-valid', paths: ['limitHz'] })
    expect(await refusalOf(changeLink(deps(), link.id, { filterBandwidthHz: 9000 }))).toMatchObject({ code: 'not-valid', paths: ['filterBandwidthHz'] })
    expect((await getLink(deps(), link.id)).carrierHz).toBe(437.5e6)
  })

  const strict = { captureRangeHz: 1200, filterBandwidthHz: 15_000, driftLimitHzPerS: 100, jumpLimitHz: 50, minElevationDeg: 10, permittedLossDb: 0.4 }
  const loosening: [string, object][] = [
    ['a larger permitted loss', { permittedLossDb: 0.6 }],
    ['a wider capture range', { captureRangeHz: 1300 }],
    ['no capture range', { captureRangeHz: null }],
    ['a wider filter', { filterBandwidthHz: 16_000 }],
    ['no filter', { filterBandwidthHz: null }],
    ['a larger drift limit', { driftLimitHzPerS: 200 }],
    ['no drift limit', { driftLimitHzPerS: null }],
    ['a larger jump limit', { jumpLimitHz: 60 }],
    ['no jump limit', { jumpLimitHz: null }],
    ['a lower minimum elevation', { minElevationDeg: 5 }],
    ['a higher minimum elevation, below which nothing is checked', { minElevationDeg: 20 }],
    ['a wider band', { bandHighHz: 437.7e6 }],
    ['a band that begins lower', { bandLowHz: 437.3e6 }],
  ]
  it.each(loosening)('wants a reason for %s, and keeps it in the trail', async (_, change) => {
    const link = await createLink(deps(), body(strict))
    expect(await refusalOf(changeLink(deps(), link.id, change))).toMatchObject({ code: 'not-valid', paths: ['reason'] })
    expect(await getLink(deps(), link.id)).toMatchObject(strict)
    expect(await changeLink(deps(), link.id, { ...change, reason: 'New modem on the ground' })).toMatchObject(change)
    expect(await lastAudit(link.id)).toMatchObject({ action: 'link.loosen', reason: 'New modem on the ground', after: change, actorName: actor.name })
  })

  it.each([
    ['a faster symbol rate, which raises the allowance', {}, { symbolRateHz: 19_200 }],
    ['a larger stated limit', { detector: 'stated', limitHz: 300 }, { limitHz: 301 }],
    ['a detector that bears more', { detector: 'stated', limitHz: 300 }, { detector: 'quadrature' }],
  ] as const)('wants a reason for %s', async (_, given, change) => {
    const link = await createLink(deps(), body(given))
    expect(await refusalOf(changeLink(deps(), link.id, change))).toMatchObject({ code: 'not-valid', paths: ['reason'] })
  })

  it('takes tighter limits without a reason, and asks for the tables anew', async () => {
    const link = await createLink(deps(), body({ detector: 'stated', limitHz: 300 }))
    await emptyQueue(test.db)
    const tight = { permittedLossDb: 0.3, captureRangeHz: 500, filterBandwidthHz: 20_000, driftLimitHzPerS: 10, jumpLimitHz: 5, limitHz: 200, bandHighHz: 437.55e6 }
    expect(await changeLink(deps(), link.id, tight)).toMatchObject({ ...tight, allowanceHz: 200, limitedBy: 'stated' })
    expect(await lastAudit(link.id)).toMatchObject({ action: 'link.change', reason: null, before: { limitHz: 300 }, after: { limitHz: 200 } })
    expect(await queuedJobs(test.db, 'predict')).toHaveLength(stationIds.length)
  })

  it('leaves the predictions and the trail alone when nothing that matters changes', async () => {
    const link = await createLink(deps(), body())
    const before = await lastAudit(link.id)
    await emptyQueue(test.db)
    await changeLink(deps(), link.id, { symbolRateHz: 9600 })
    expect((await lastAudit(link.id)).id).toBe(before.id)
    await changeLink(deps(), link.id, { name: 'Renamed' })
    expect(await queuedJobs(test.db, 'predict')).toEqual([])
  })
})

describe('retiring a link', () => {
  it('keeps it for the record, takes it from the lists, frees its name and changes no more', async () => {
    const link = await createLink(deps(), body({ name: 'Old beacon' }))
    await emptyQueue(test.db)
    await retireLink(deps(), link.id)
    await retireLink(deps(), link.id)
    expect((await getLink(deps(), link.id)).retiredAt).toBe(now.toISOString())
    expect((await listLinks(deps(), { limit: 1000 })).items.map(item => item.id)).not.toContain(link.id)
    expect(await queuedJobs(test.db, 'predict')).toHaveLength(stationIds.length)
    expect(await refusalOf(changeLink(deps(), link.id, { name: 'Back' }))).toMatchObject({ code: 'conflict' })
    await createLink(deps(), body({ name: 'Old beacon' }))
  })

  it('goes with its spacecraft, whose passes are then asked to be taken back', async () => {
    const leaving = await addSpacecraft(test.db, now)
    await retireSpacecraft(deps(), leaving.id)
    expect((await test.db.select().from(links).where(eq(links.id, leaving.link.id)))[0]!.retiredAt).toEqual(now)
    expect((await queuedJobs(test.db, 'predict')).some(job => job.spacecraftId === leaving.id)).toBe(true)
  })
})

it('lists by spacecraft and name, page by page, each once', async () => {
  const seen: string[] = []
  let cursor: string | undefined
  do {
    const page = await listLinks(deps(), { limit: 3, cursor })
    seen.push(...page.items.map(item => item.id))
    expect(page.items.length).toBeLessThanOrEqual(3)
    cursor = page.nextCursor ?? undefined
  } while (cursor)
  expect(seen).toEqual((await listLinks(deps(), { limit: 1000 })).items.map(item => item.id))
  expect(new Set(seen).size).toBe(seen.length)
  expect(await refusalOf(listLinks(deps(), { limit: 3, cursor: 'nonsense' }))).toMatchObject({ code: 'not-valid', paths: ['cursor'] })
})
