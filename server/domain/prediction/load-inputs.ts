import { createHash } from 'node:crypto'
import { and, asc, eq, isNull } from 'drizzle-orm'
import { canonicalJson } from '#shared/formats/canonical-json'
import type { LinkModel, MeanElements, RadioModel, Site, Span } from '#shared/physics/types'
import type { Settings } from '#shared/schemas/settings'
import { antennas, elementSets, links, radios, spacecraft, stations } from '~~/server/database/schema'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { manoeuvresOf } from '../manoeuvres/manoeuvres-of'
import { readSettings } from '../settings/read-settings'
import { ut1InForce } from '../settings/ut1-in-force'
import { learnedAccuracy } from './learned-accuracy'
import type { BudgetParameters, LinkRow, RadioRow, SpacecraftRow, StationRow } from './models'
import { budgetParametersOf, isUplinkOf, linkMinElevationRad, linkModelOf, radioFor, radioModelOf, siteOf } from './models'
import { loadQuiet } from './quiet-spans'

/** AOS is uncertain by a second or two; a newer set may bring it forward by some more. */
const LARGEST_LEAD_MS = 30_000

export interface PairIds { spacecraftId: string, stationId: string }

/** A link that the station can serve, with all that its tables are made of. */
export interface ServedLink {
  readonly link: LinkRow
  readonly radio: RadioRow
  readonly model: LinkModel
  readonly minElevationRad: number
  readonly radioModel: RadioModel
  readonly budget: BudgetParameters
  /** How much before AOS the first row takes effect. */
  readonly firstRowLeadMs: number
  /** Spans in which no row may take effect; those of any pass to come. */
  readonly quiet: readonly Span[]
  /** SHA-256 of all that goes into a table of this link beside the pass itself, its quiet spans and its uplink. */
  readonly digest: string
  /** The uplink that a coherent downlink turns around: its table goes into this link's. Null for all other links. */
  readonly uplink: ServedLink | null
}

export interface PairInputs {
  readonly craft: SpacecraftRow
  readonly station: StationRow
  readonly settings: Settings
  /** Null: nothing is predicted, and `stopped` says why. */
  readonly set: { readonly id: string, readonly elements: MeanElements } | null
  readonly stopped: string | null
  readonly site: Site
  readonly ut1: { readonly ut1MinusUtcS: number, readonly boundS: number }
  readonly served: readonly ServedLink[]
  /** Why a link of this spacecraft has no tables here, by link id. */
  readonly unserved: ReadonlyMap<string, string>
}

/** All that decides the passes and tables of one spacecraft at one station, as it stands now. `setId` asks for another set than the one in use. */
export async function loadInputs({ db, now }: Pick<Deps, 'db' | 'now'>, { spacecraftId, stationId }: PairIds, setId?: string): Promise<PairInputs> {
  const [craft] = await db.select().from(spacecraft).where(eq(spacecraft.id, spacecraftId))
  const [station] = await db.select().from(stations).where(eq(stations.id, stationId))
  if (!craft || !station) throw new DomainError('not-found', 'There is no such spacecraft or station any more.')
  const wanted = setId ?? craft.inUseSetId
  const [set] = wanted ? await db.select({ id: elementSets.id, elements: elementSets.elements }).from(elementSets).where(eq(elementSets.id, wanted)) : []
  const linkRows = await db.select().from(links).where(eq(links.spacecraftId, spacecraftId)).orderBy(asc(links.id))
  const radioRows = await db.select({ radio: radios, setupS: antennas.setupS }).from(radios).innerJoin(antennas, eq(antennas.id, radios.antennaId))
    .where(and(eq(antennas.stationId, stationId), isNull(antennas.retiredAt), isNull(radios.retiredAt)))
  const settings = await readSettings(db)
  const ut1 = ut1InForce(settings, now)
  const site = siteOf(station)
  const learned = set && await learnedAccuracy({ db }, { spacecraftId, elements: set.elements, settings })
  const manoeuvres = await manoeuvresOf({ db }, spacecraftId)
  const quiet = await loadQuiet({ db, now }, { stationId, spacecraftId, linkIds: linkRows.map(link => link.id) })

  const served: ServedLink[] = []
  const unserved = new Map<string, string>()
  for (const link of linkRows) {
    const radio = set && radioFor(link, set.elements, radioRows.map(row => row.radio))
    const setupS = radioRows.find(row => row.radio === radio)?.setupS ?? 0
    if (link.retiredAt) unserved.set(link.id, 'The link has been retired.')
    else if (set && learned && radio) served.push(serve({ craft, station, link, radio, setupS, elements: set.elements, settings, learned, manoeuvres, ut1, site, quiet: quiet.get(link.id) ?? [] }))
    else unserved.set(link.id, `No radio at ${station.name} covers this link any more.`)
  }
  return { craft, station, settings, set: set ?? null, stopped: whyStopped(craft, station, set !== undefined), site, ut1, served: served.map(link => ({ ...link, uplink: served.find(other => isUplinkOf(other.model, link.model)) ?? null })), unserved }
}

function whyStopped(craft: SpacecraftRow, station: StationRow, hasSet: boolean): string | null {
  if (craft.retiredAt) return `${craft.name} has been retired.`
  if (station.retiredAt) return `${station.name} has been retired.`
  return hasSet ? null : `${craft.name} has no element set in use.`
}

type Sources = Parameters<typeof budgetParametersOf>[0] & { link: LinkRow, site: Site, setupS: number, quiet: readonly Span[] }

function serve({ craft, station, link, radio, setupS, elements, settings, learned, manoeuvres, ut1, site, quiet }: Sources): ServedLink {
  const model = linkModelOf(link)
  const minElevationRad = linkMinElevationRad(link)
  const radioModel = radioModelOf(radio)
  const budget = budgetParametersOf({ craft, station, radio, elements, settings, learned, manoeuvres, ut1 })
  // The antenna is free for its set-up time before a pass, so the radio may be, too.
  const firstRowLeadMs = Math.min(LARGEST_LEAD_MS, setupS * 1000)
  const inputs = { elements, site, model, minElevationRad, radioId: radio.id, radioModel, budget, firstRowLeadMs }
  return { link, radio, model, minElevationRad, radioModel, budget, firstRowLeadMs, quiet, digest: inputsDigest(inputs), uplink: null }
}

/** Names of objects and the like change nothing in a prediction; raise `version` when the computing itself changes. */
export function inputsDigest(inputs: { elements: MeanElements, site: Site, model: LinkModel, minElevationRad: number, radioId: string, radioModel: RadioModel, budget: BudgetParameters, firstRowLeadMs: number }): string {
  const { name: _name, designator: _designator, classification: _classification, elementSetNumber: _number, revolutionAtEpoch: _revolution, ...numbers } = inputs.elements
  return createHash('sha256').update(canonicalJson({ version: 2, ...inputs, elements: numbers })).digest('hex')
}

/** Changes whenever anything that the pair's prediction was made with does; the rules of approval count too. */
export function fingerprint(inputs: PairInputs): string {
  const { set, stopped, settings, site, ut1, served, unserved } = inputs
  return canonicalJson({
    set: set?.id ?? null, stopped, site, ut1, horizonDays: settings.horizonDays,
    served: served.map(({ link, digest, quiet }) => [link.id, digest, quiet.map(span => [span.fromMs, span.toMs]), link.approveWhatHolds]), unserved: [...unserved],
  })
}
