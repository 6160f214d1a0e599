import { eq } from 'drizzle-orm'
import { readElements } from '#shared/formats/elements/read-elements'
import type { LinkModel, MeanElements, RadioModel, Site } from '#shared/physics/types'
import type { BenchPredictBody } from '#shared/schemas/bench'
import { benchLink, benchRadio } from '#shared/schemas/bench'
import { elementSets, links, radios, stations } from '~~/server/database/schema'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { linkMinElevationRad, linkModelOf, radioModelOf, rampOf, siteOf } from '../prediction/models'
import { linkModelFrom } from './link-model-from'

const RAD_PER_DEG = Math.PI / 180
const problem = (path: string, message: string) => new DomainError('not-valid', `${path}: ${message}`, [{ path, message }])

/** Stored things are for those who may read them: people, and keys of scope `read`; a station's key for its own station. */
function requireReadable({ actor }: Deps, path: string, noun: string, stationId?: string): void {
  if (actor.kind !== 'key' || actor.scope === 'read') return
  if (actor.scope === 'station' && stationId !== undefined && stationId === actor.stationId) return
  throw problem(path, `There is no such ${noun}.`)
}

/** The one element set of a what-if, with what its reader warned of. */
export async function resolveElements(deps: Deps, given: BenchPredictBody['elements']): Promise<{ elements: MeanElements, warnings: string[] }> {
  if ('text' in given) return readOneSet(given.text, deps.now)
  requireReadable(deps, 'elements.elementSetId', 'element set')
  const [row] = await deps.db.select({ elements: elementSets.elements }).from(elementSets).where(eq(elementSets.id, given.elementSetId))
  if (!row) throw problem('elements.elementSetId', 'There is no such element set.')
  return { elements: row.elements, warnings: [] }
}

function readOneSet(text: string, now: Date): { elements: MeanElements, warnings: string[] } {
  const path = 'elements.text'
  const reading = readElements(Buffer.from(text), { nowMs: now.getTime() })
  const notes = reading.kind === 'refused' ? reading.errors : reading.refusals
  if (notes.length > 0) {
    const detail = reading.kind === 'refused' ? reading.detail : notes[0]!.message
    throw new DomainError('not-valid', detail, notes.slice(0, 100).map(({ line, message }) => ({ path, message, line })))
  }
  const [set, second] = reading.kind === 'read' ? reading.sets : []
  if (!set || second) {
    const message = second ? `Give one element set; a second one begins at line ${second.line}.` : 'Give one element set.'
    throw new DomainError('not-valid', message, [{ path, message, line: second?.line ?? 1 }])
  }
  return { elements: set.elements, warnings: set.warnings.map(({ line, message }) => `Line ${line}: ${message}`) }
}

export async function resolveSite(deps: Deps, given: BenchPredictBody['station']): Promise<Site> {
  if ('stationId' in given) {
    requireReadable(deps, 'station.stationId', 'station', given.stationId)
    const [row] = await deps.db.select().from(stations).where(eq(stations.id, given.stationId))
    if (!row) throw problem('station.stationId', 'There is no such station.')
    return siteOf(row)
  }
  return {
    latitudeRad: given.latitudeDeg * RAD_PER_DEG,
    longitudeRad: given.longitudeDeg * RAD_PER_DEG,
    heightM: given.heightM,
    minElevationRad: given.minElevationDeg * RAD_PER_DEG,
    mask: (given.mask ?? []).map(point => ({ azimuthRad: point.azimuthDeg * RAD_PER_DEG, elevationRad: point.elevationDeg * RAD_PER_DEG })),
  }
}

export async function resolveLink(deps: Deps, given: BenchPredictBody['link']): Promise<{ link: LinkModel, linkMinElevationRad: number }> {
  if (given === undefined || !('linkId' in given)) return { link: linkModelFrom(given ?? benchLink.parse({})), linkMinElevationRad: -Math.PI / 2 }
  requireReadable(deps, 'link.linkId', 'link')
  const [row] = await deps.db.select().from(links).where(eq(links.id, given.linkId))
  if (!row) throw problem('link.linkId', 'There is no such link.')
  return { link: linkModelOf(row), linkMinElevationRad: linkMinElevationRad(row) }
}

export async function resolveRadio(deps: Deps, given: BenchPredictBody['radio']): Promise<RadioModel> {
  if (given !== undefined && 'radioId' in given) {
    requireReadable(deps, 'radio.radioId', 'radio')
    const [row] = await deps.db.select().from(radios).where(eq(radios.id, given.radioId))
    if (!row) throw problem('radio.radioId', 'There is no such radio.')
    return radioModelOf(row)
  }
  const { ramp, slopeStepHzPerS, maxSlopeHzPerS, ...radio } = given ?? benchRadio.parse({})
  return { ...radio, ramp: rampOf({ ramps: ramp, slopeStepHzPerS, maxSlopeHzPerS }) }
}
