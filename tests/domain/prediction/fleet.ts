import { createHash, randomUUID } from 'node:crypto'
import { eq } from 'drizzle-orm'
import type { MeanElements } from '#shared/physics/types'
import type { Role } from '#shared/permissions'
import type { Db } from '~~/server/database/client'
import { antennas, elementSets, elementUploads, links, people, radios, settings, spacecraft, stations } from '~~/server/database/schema'
import type { PersonActor } from '~~/server/domain/context'
import { referencePasses } from '../../support/reference-data'
import { elementsFromLines } from '../../support/reference-elements'

const reference = referencePasses()

/** Where the reference's window begins. */
export const windowStart = new Date('2026-12-01T00:00:00.000Z')

export function referenceElements(id: string): MeanElements {
  const satellite = reference.satellites.find(candidate => candidate.id === id)!
  return elementsFromLines(satellite.line1, satellite.line2)
}

/** Passes by the independent program, whole ones only. */
export function referencePassesOf(satellite: string, station: string, minElevationDeg: number) {
  return reference.passes.filter(pass => pass.satellite === satellite && pass.station === station && pass.minElevationDeg === minElevationDeg && !pass.aosClipped && !pass.losClipped)
}

/** The same orbit with the spacecraft some seconds ahead. */
export function ahead(elements: MeanElements, seconds: number): MeanElements {
  return { ...elements, meanAnomalyDeg: (elements.meanAnomalyDeg + elements.meanMotionRevPerDay * 360 * seconds / 86_400 + 360) % 360 }
}

export async function addSet(db: Db, spacecraftId: string, elements: MeanElements): Promise<string> {
  const text = JSON.stringify(elements)
  const sha256 = createHash('sha256').update(text).digest('hex')
  const [upload] = await db.insert(elementUploads).values({ state: 'finished', by: 'Test', source: 'api', sha256, totalBytes: text.length }).returning()
  const [set] = await db.insert(elementSets).values({
    uploadId: upload!.id, spacecraftId, state: 'waiting', epoch: new Date(elements.epochUtcUs / 1000), epochUtcUs: elements.epochUtcUs, elements,
    originalText: text, lineNumber: 1, sha256, contentSha256: createHash('sha256').update(randomUUID()).digest('hex'),
  }).returning()
  return set!.id
}

/** Puts a set into use, without asking for a prediction. */
export async function useSet(db: Db, spacecraftId: string, setId: string): Promise<void> {
  const [craft] = await db.select().from(spacecraft).where(eq(spacecraft.id, spacecraftId))
  if (craft!.inUseSetId) await db.update(elementSets).set({ state: 'past' }).where(eq(elementSets.id, craft!.inUseSetId))
  await db.update(elementSets).set({ state: 'in-use' }).where(eq(elementSets.id, setId))
  await db.update(spacecraft).set({ inUseSetId: setId }).where(eq(spacecraft.id, spacecraftId))
}

export interface Fleet { spacecraftId: string, stationId: string, antennaId: string, radioId: string, downlinkId: string, uplinkId: string, setId: string }

/** One spacecraft of the reference over one of its stations, with a downlink that approves what holds and an uplink that does not. */
export async function createFleet(db: Db, { satellite = 'SSO500', station = 'N78', elements = referenceElements(satellite) } = {}): Promise<Fleet> {
  const place = reference.stations.find(candidate => candidate.id === station)!
  await db.insert(settings).values({ key: 'horizonDays', value: 3 }).onConflictDoNothing()
  const [craft] = await db.insert(spacecraft).values({ name: `Dunlin ${randomUUID().slice(0, 4)}`, oscillatorPpm: 0.1 }).returning()
  const [site] = await db.insert(stations).values({
    name: `Holm ${randomUUID().slice(0, 4)}`, latitudeDeg: place.latitudeDeg, longitudeDeg: place.longitudeDeg, heightM: place.heightM, minElevationDeg: 5, zone: 'Arctic/Longyearbyen', clockErrorMs: 1,
  }).returning()
  const [antenna] = await db.insert(antennas).values({ stationId: site!.id, name: 'North dish' }).returning()
  const [radio] = await db.insert(radios).values({ antennaId: antenna!.id, name: 'Modem', transmits: true, receives: true, tuneLowHz: 140e6, tuneHighHz: 450e6, stepHz: 10, latencyMs: 50 }).returning()
  const linkOf = (name: string, direction: 'uplink' | 'downlink', carrierHz: number) => ({
    spacecraftId: craft!.id, name, direction, carrierHz, bandLowHz: carrierHz - 50e3, bandHighHz: carrierHz + 50e3, symbolRateHz: 9600, modulation: 'BPSK', detector: 'quadrature' as const,
    approveWhatHolds: direction === 'downlink',
  })
  const [downlink] = await db.insert(links).values(linkOf('Telemetry', 'downlink', 437.5e6)).returning()
  const [uplink] = await db.insert(links).values(linkOf('Command', 'uplink', 145.9e6)).returning()
  const setId = await addSet(db, craft!.id, elements)
  await useSet(db, craft!.id, setId)
  return { spacecraftId: craft!.id, stationId: site!.id, antennaId: antenna!.id, radioId: radio!.id, downlinkId: downlink!.id, uplinkId: uplink!.id, setId }
}

export async function createPerson(db: Db, name: string, roles: Role[]): Promise<PersonActor> {
  const [row] = await db.insert(people).values({ email: `${name.toLowerCase()}-${randomUUID().slice(0, 6)}@tern-bay.example`, name, roles }).returning()
  return { kind: 'person', id: row!.id, name, email: row!.email, roles, zone: 'UTC', sessionHash: '' }
}
