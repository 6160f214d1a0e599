import { createHash, randomUUID } from 'node:crypto'
import { eq } from 'drizzle-orm'
import type { Role } from '../../shared/permissions'
import type { MeanElements } from '../../shared/physics/types'
import type { Db } from '../../server/database/client'
import type { StoredCheck } from '../../server/database/schema'
import * as schema from '../../server/database/schema'
import type { PersonActor } from '../../server/domain/context'
import { loadInputs } from '../../server/domain/prediction/load-inputs'

/** Rows that tests begin with, put in directly; each function gives the row, and takes what differs from an ordinary one. */
type Given<T extends { $inferInsert: object }> = Partial<T['$inferInsert']>

let counter = 0
const serial = () => ++counter
const minute = 60_000

export async function addPerson(db: Db, roles: Role[], given: Given<typeof schema.people> = {}) {
  const number = serial()
  const [row] = await db.insert(schema.people).values({ email: `person-${number}@ops.example`, name: `Person ${number}`, roles, ...given }).returning()
  return row!
}

/** The person as an actor, as after signing in. */
export async function addActor(db: Db, roles: Role[], given: Given<typeof schema.people> = {}): Promise<PersonActor> {
  const { id, name, email, zone } = await addPerson(db, roles, given)
  return { kind: 'person', id, name, email, roles, zone, sessionHash: 'none' }
}

/** A station with one antenna and one radio from 100 MHz to 10 GHz. */
export async function addStation(db: Db, given: Given<typeof schema.stations> = {}, radioGiven: Given<typeof schema.radios> = {}) {
  const [station] = await db.insert(schema.stations).values({ name: `Station ${serial()}`, latitudeDeg: 60, longitudeDeg: 10, heightM: 50, zone: 'UTC', ...given }).returning()
  const [antenna] = await db.insert(schema.antennas).values({ stationId: station!.id, name: 'Antenna' }).returning()
  const [radio] = await db.insert(schema.radios).values({ antennaId: antenna!.id, name: 'Radio', transmits: true, receives: true, tuneLowHz: 1e8, tuneHighHz: 1e10, stepHz: 10, ...radioGiven }).returning()
  return { ...station!, antenna: antenna!, radio: radio! }
}
export type StationFixture = Awaited<ReturnType<typeof addStation>>

/** A spacecraft with a set in use of the given epoch, and one downlink. */
export async function addSpacecraft(db: Db, epoch: Date, given: Given<typeof schema.spacecraft> = {}, linkGiven: Given<typeof schema.links> = {}) {
  const [craft] = await db.insert(schema.spacecraft).values({ name: `Craft ${serial()}`, catalogueNumber: String(90_000 + serial()), ...given }).returning()
  const set = await addElementSet(db, epoch, { spacecraftId: craft!.id, state: 'in-use' })
  await db.update(schema.spacecraft).set({ inUseSetId: set.id }).where(eq(schema.spacecraft.id, craft!.id))
  const link = await addLink(db, craft!.id, linkGiven)
  return { ...craft!, inUseSetId: set.id, set, link }
}
export type SpacecraftFixture = Awaited<ReturnType<typeof addSpacecraft>>

/** A near-circular orbit at some 500 km. */
const ordinaryElements: MeanElements = {
  name: null, catalogueNumber: null, designator: null, epochUtcUs: 0, meanMotionRevPerDay: 15.2, eccentricity: 0.001, inclinationDeg: 97.4, raanDeg: 10, argPericenterDeg: 20, meanAnomalyDeg: 30,
  bstar: 1e-4, meanMotionDot: 0, meanMotionDdot: 0, classification: 'U', elementSetNumber: null, revolutionAtEpoch: null,
}

export async function addElementSet(db: Db, epoch: Date, given: Given<typeof schema.elementSets> = {}) {
  const text = randomUUID()
  const sha256 = createHash('sha256').update(text).digest('hex')
  const [upload] = await db.insert(schema.elementUploads).values({ state: 'finished', by: 'Test', source: 'api', sha256, totalBytes: text.length }).returning()
  const [set] = await db.insert(schema.elementSets).values({
    uploadId: upload!.id, epoch, epochUtcUs: epoch.getTime() * 1000, originalText: text, lineNumber: 1, sha256, contentSha256: sha256,
    elements: { ...ordinaryElements, epochUtcUs: epoch.getTime() * 1000 }, ...given,
  }).returning()
  return set!
}

export async function addLink(db: Db, spacecraftId: string, given: Given<typeof schema.links> = {}) {
  const [link] = await db.insert(schema.links).values({
    spacecraftId, name: `Link ${serial()}`, direction: 'downlink', carrierHz: 437.5e6, bandLowHz: 435e6, bandHighHz: 438e6, symbolRateHz: 9600,
    modulation: 'GMSK', detector: 'quadrature', approveWhatHolds: true, ...given,
  }).returning()
  return link!
}

/** Ten minutes long unless told otherwise. */
export async function addPass(db: Db, craft: SpacecraftFixture, station: { id: string }, aos: Date, given: Given<typeof schema.passes> = {}) {
  const [pass] = await db.insert(schema.passes).values({
    spacecraftId: craft.id, stationId: station.id, elementSetId: craft.set.id, aos,
    culmination: new Date(aos.getTime() + 5 * minute), los: new Date(aos.getTime() + 10 * minute), maxElevationDeg: 42, ...given,
  }).returning()
  return pass!
}

/** What a check of a table with this margin says: the allowance is 1000 Hz. */
export function checkOf(margin: number, at: Date): StoredCheck {
  return {
    allowanceHz: 1000, limitedBy: 'loss', worstResidualHz: 1000 / margin, worstAt: at.toISOString(), margin,
    budget: { stepsHz: 5, timingHz: 10, ut1Hz: 0, orbitHz: 1000 / margin - 15, oscillatorHz: 0, trimHz: 0 },
    symbolClockPpm: { min: -20, max: 20 }, excess: [], faults: [], kappa: 2, workable: [{ from: at.toISOString(), to: new Date(at.getTime() + 10 * minute).toISOString() }],
  }
}

/** A table with one revision; what is published carries a digest and a signature that nobody verifies. */
export async function addTable(db: Db, craft: SpacecraftFixture, station: StationFixture, pass: { id: string, aos: Date }, given: Given<typeof schema.tableRevisions> & { margin?: number, linkId?: string } = {}) {
  const { margin = 5, linkId = craft.link.id, ...rest } = given
  const [table] = await db.insert(schema.tables).values({ passId: pass.id, linkId }).returning()
  return { ...table!, revision: await addRevision(db, craft, station, { tableId: table!.id, aos: pass.aos, margin, ...rest }) }
}

export async function addRevision(db: Db, craft: SpacecraftFixture, station: StationFixture, given: Given<typeof schema.tableRevisions> & { tableId: string, aos: Date, margin?: number }) {
  const { margin = 5, aos, state = 'drafted', ...rest } = given
  const out = ['published', 'collected', 'superseded', 'withdrawn'].includes(state)
  const publishedAt = new Date(aos.getTime() - 3600_000)
  const [revision] = await db.insert(schema.tableRevisions).values({
    number: 1, state, verdict: margin < 1 ? 'breaks' : margin < 1.25 ? 'tight' : 'holds', radioId: station.radio.id, elementSetId: craft.set.id,
    retunes: [{ at: aos.toISOString(), frequencyHz: 437_510_000, slopeHzPerS: 0, dopplerHz: 10_000, rangeRateMps: -6850, azimuthDeg: 200, elevationDeg: 5, residualMinHz: -50, residualMaxHz: 50, lossDb: 0.1 }],
    check: checkOf(margin, aos), inputsDigest: randomUUID(),
    ...(out ? { publishedAt, publishedBy: 'Schedule', canonical: '{}', digest: 'd'.repeat(64), signature: 'header..signature' } : {}),
    ...(state === 'collected' ? { collectedAt: publishedAt } : {}),
    ...rest,
  }).returning()
  return revision!
}

/** What a revision's `inputsDigest` is while nothing it depends on has changed: such a table can be published. */
export async function presentDigest(db: Db, now: Date, craft: SpacecraftFixture, station: { id: string }): Promise<string> {
  const { served } = await loadInputs({ db, now }, { spacecraftId: craft.id, stationId: station.id })
  return served.find(({ link }) => link.id === craft.link.id)!.digest
}
