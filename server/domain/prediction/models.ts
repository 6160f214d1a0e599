import type { AlongTrackGrowth, AlongTrackModel } from '#shared/physics/accuracy/prior'
import { meanSpeedMps, perigeeSpeedMps } from '#shared/physics/accuracy/prior'
import { SPEED_OF_LIGHT_MPS } from '#shared/physics/doppler/ratio'
import { isTurnedAroundTo } from '#shared/physics/doppler/two-way'
import type { BudgetModel, ConverterModel, LinkModel, MeanElements, RadioModel, RampModel, Site } from '#shared/physics/types'
import type { Settings } from '#shared/schemas/settings'
import type { links, radios, spacecraft, stations } from '~~/server/database/schema'
import type { ManoeuvreRow } from '../manoeuvres/manoeuvres-of'
import { unknownTo } from '../manoeuvres/manoeuvres-of'

export type SpacecraftRow = typeof spacecraft.$inferSelect
export type StationRow = typeof stations.$inferSelect
export type LinkRow = typeof links.$inferSelect
export type RadioRow = typeof radios.$inferSelect

/** An error budget as plain data, to cross to a worker; `budgetModelOf` gives it its function of time there. */
export interface BudgetParameters extends Omit<BudgetModel, 'alongTrackSigmaS'> { readonly alongTrack: AlongTrackModel }

const RAD_PER_DEG = Math.PI / 180
/** Speed of the ground at the equator. */
const GROUND_SPEED_MPS = 465.1

export function siteOf(station: StationRow): Site {
  return {
    latitudeRad: station.latitudeDeg * RAD_PER_DEG,
    longitudeRad: station.longitudeDeg * RAD_PER_DEG,
    heightM: station.heightM,
    minElevationRad: station.minElevationDeg * RAD_PER_DEG,
    mask: station.mask.map(point => ({ azimuthRad: point.azimuthDeg * RAD_PER_DEG, elevationRad: point.elevationDeg * RAD_PER_DEG })),
  }
}

export function linkModelOf(link: LinkRow): LinkModel {
  const { direction, carrierHz, symbolRateHz, detector, permittedLossDb, captureRangeHz, filterBandwidthHz, rolloff } = link
  const { driftLimitHzPerS, jumpLimitHz, limitHz, errorRate, esN0Db, bandwidthHz, spreadingFactor, bandLowHz, bandHighHz } = link
  return { direction, carrierHz, symbolRateHz, detector, permittedLossDb, captureRangeHz, filterBandwidthHz, rolloff, driftLimitHzPerS, jumpLimitHz, limitHz, errorRate, esN0Db, bandwidthHz, spreadingFactor, bandLowHz, bandHighHz, ...turnaroundOf(link) }
}

/** Nothing where there is none, so that the digests of one-way links stay what they were. */
function turnaroundOf({ turnaroundNumerator: numerator, turnaroundDenominator: denominator, uplinkPrecompensated }: LinkRow): Pick<LinkModel, 'turnaround'> {
  return numerator === null || denominator === null ? {} : { turnaround: { numerator, denominator, uplinkPrecompensated, uplinkHz: null } }
}

/** Whether a coherent downlink turns this uplink around, so that what the uplink's table leaves at the spacecraft comes back on it. */
export const isUplinkOf = (uplink: LinkModel, downlink: LinkModel): boolean =>
  uplink.direction === 'uplink' && downlink.turnaround?.uplinkPrecompensated === true && isTurnedAroundTo(uplink.carrierHz, downlink)

/** A link's own minimum elevation, rad. */
export const linkMinElevationRad = (link: LinkRow): number => link.minElevationDeg * RAD_PER_DEG

export function radioModelOf(radio: RadioRow): RadioModel {
  const { stepHz, offsetHz, minDwellS, latencyMs, latencyUncertaintyMs, planMode, cadenceS } = radio
  return { stepHz, offsetHz, minDwellS, latencyMs, latencyUncertaintyMs, ramp: rampOf(radio), converter: converterOf(radio), cadenceS: planMode === 'cadence' ? cadenceS : null }
}

/** Slopes of a radio that ramps; null for one that steps. */
export function rampOf({ ramps, slopeStepHzPerS, maxSlopeHzPerS }: Pick<RadioRow, 'ramps' | 'slopeStepHzPerS' | 'maxSlopeHzPerS'>): RampModel | null {
  return ramps && slopeStepHzPerS !== null && maxSlopeHzPerS !== null ? { slopeStepHzPerS, maxSlopeHzPerS } : null
}

export function converterOf({ converterLoHz, converterInverts }: Pick<RadioRow, 'converterLoHz' | 'converterInverts'>): ConverterModel | null {
  return converterLoHz === null ? null : { loHz: converterLoHz, inverts: converterInverts }
}

/**
 * The spacecraft's own along-track accuracy where it is stated, else what its sets have taught, which is the prior where
 * they are few; wider after a manoeuvre that the elements do not know of.
 */
export function alongTrackOf(craft: SpacecraftRow, elements: MeanElements, learned: AlongTrackGrowth, manoeuvres: readonly ManoeuvreRow[]): AlongTrackModel {
  const unknown = unknownTo(elements, manoeuvres)
  return {
    floorKm: craft.alongTrackFloorKm ?? learned.floorKm,
    growthKmPerDay: craft.alongTrackGrowthKmPerDay ?? learned.growthKmPerDay,
    epochMs: elements.epochUtcUs / 1000,
    speedMps: meanSpeedMps(elements),
    // Nothing where there is none, so that digests stay what they were.
    ...(unknown.length > 0 ? { manoeuvres: unknown } : {}),
  }
}

export interface BudgetSources {
  readonly craft: SpacecraftRow
  readonly station: StationRow
  readonly radio: RadioRow
  readonly elements: MeanElements
  readonly settings: Pick<Settings, 'k'>
  readonly learned: AlongTrackGrowth
  readonly manoeuvres: readonly ManoeuvreRow[]
  readonly ut1: { readonly ut1MinusUtcS: number, readonly boundS: number }
}

export function budgetParametersOf({ craft, station, radio, elements, settings, learned, manoeuvres, ut1 }: BudgetSources): BudgetParameters {
  return {
    clockErrorMs: station.clockErrorMs,
    ut1MinusUtcS: ut1.ut1MinusUtcS,
    ut1BoundS: ut1.boundS,
    spacecraftPpm: craft.oscillatorPpm,
    stationPpm: radio.referencePpm,
    k: settings.k,
    alongTrack: alongTrackOf(craft, elements, learned, manoeuvres),
  }
}

/** Largest Doppler shift that a set's orbit can give a carrier, either way, Hz. */
export function dopplerRoomHz(carrierHz: number, elements: MeanElements): number {
  return carrierHz * (perigeeSpeedMps(elements) + GROUND_SPEED_MPS) / SPEED_OF_LIGHT_MPS
}

/**
 * The radio that serves a link at a station: it works in the link's direction and its tuning range holds the carrier
 * with its Doppler shift. Of several the one with the finest step, then by name and id, so that the choice stays.
 */
export function radioFor(link: LinkRow, elements: MeanElements, radios: readonly RadioRow[]): RadioRow | null {
  // Shifted on the way up and again on the way down.
  const legs = link.turnaroundNumerator !== null && !link.uplinkPrecompensated ? 2 : 1
  const room = legs * dopplerRoomHz(link.carrierHz, elements)
  const [best] = radios
    .filter(radio => radio.retiredAt === null && (link.direction === 'uplink' ? radio.transmits : radio.receives)
      && radio.tuneLowHz <= link.carrierHz - room && link.carrierHz + room <= radio.tuneHighHz)
    .sort((a, b) => a.stepHz - b.stepHz || (a.name < b.name ? -1 : a.name > b.name ? 1 : 0) || (a.id < b.id ? -1 : 1))
  return best ?? null
}
