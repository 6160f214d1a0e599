import type { z } from 'zod'
import { benchBudget, benchLink, benchRadio } from '#shared/schemas/bench'
import type { LinkOut } from '#shared/schemas/links'
import type { RadioOut, StationOut } from '#shared/schemas/stations'
import type { MaskDeg } from '../catalogue/horizon-line'

/** Taken from what the product keeps, or written out here. */
export type Source = 'held' | 'given'
type LinkFields = Pick<z.output<typeof benchLink>, 'direction' | 'carrierHz' | 'symbolRateHz' | 'detector' | 'permittedLossDb' | 'limitHz' | 'captureRangeHz' | 'filterBandwidthHz' | 'rolloff' | 'driftLimitHzPerS' | 'jumpLimitHz' | 'errorRate' | 'esN0Db' | 'bandwidthHz' | 'spreadingFactor' | 'turnaround'>
type RadioFields = z.output<typeof benchRadio>

/** What is asked of the bench, as the form holds it: both sources of each part, so that changing over loses nothing typed. */
export interface BenchQuestion {
  elements: { source: Source, id: string | null, text: string }
  station: { source: Source, id: string | null, latitudeDeg: number, longitudeDeg: number, heightM: number, minElevationDeg: number, mask: MaskDeg[] }
  /** UTC, as typed. */
  window: { from: string, to: string, sampleIntervalS: number, ut1MinusUtcS: number }
  link: { source: Source, id: string | null } & LinkFields
  radio: { source: Source, id: string | null } & RadioFields
  budget: z.output<typeof benchBudget>
  /** Offset whose loss is read off, Hz. */
  offsetHz: number | null
}

const MINUTE_MS = 60_000
const DAY_MS = 86_400_000
const minuteText = (utcMs: number) => new Date(utcMs).toISOString().slice(0, 16).replace('T', ' ')

/** The 24 hours from this minute on. */
export function comingDay(nowMs: number): { from: string, to: string } {
  const fromMs = Math.floor(nowMs / MINUTE_MS) * MINUTE_MS
  return { from: minuteText(fromMs), to: minuteText(fromMs + DAY_MS) }
}

export function pickLink({ direction, carrierHz, symbolRateHz, detector, permittedLossDb, limitHz, captureRangeHz, filterBandwidthHz, rolloff, driftLimitHzPerS, jumpLimitHz, errorRate, esN0Db, bandwidthHz, spreadingFactor, ...rest }: LinkFields | LinkOut): LinkFields {
  const turnaround = 'turnaround' in rest ? rest.turnaround && { ...rest.turnaround } : turnaroundOf(rest)
  return { turnaround, direction, carrierHz, symbolRateHz, detector, permittedLossDb, limitHz, captureRangeHz, filterBandwidthHz, rolloff, driftLimitHzPerS, jumpLimitHz, errorRate, esN0Db, bandwidthHz, spreadingFactor }
}
function turnaroundOf({ turnaroundNumerator: numerator, turnaroundDenominator: denominator, uplinkPrecompensated }: Pick<LinkOut, 'turnaroundNumerator' | 'turnaroundDenominator' | 'uplinkPrecompensated'>): LinkFields['turnaround'] {
  return numerator === null || denominator === null ? null : { numerator, denominator, uplinkPrecompensated, uplinkHz: null }
}
/** A held radio's cadence and converter stay behind: the bench's own radio plans the fewest retunes, in the sky. */
export function pickRadio(radio: RadioFields | RadioOut): RadioFields {
  const { stepHz, offsetHz, minDwellS, latencyMs, latencyUncertaintyMs, slopeStepHzPerS, maxSlopeHzPerS } = radio
  return { stepHz, offsetHz, minDwellS, latencyMs, latencyUncertaintyMs, ramp: 'ramp' in radio ? radio.ramp : radio.ramps, slopeStepHzPerS, maxSlopeHzPerS }
}
export function pickSite({ latitudeDeg, longitudeDeg, heightM, minElevationDeg, mask }: Pick<StationOut, 'latitudeDeg' | 'longitudeDeg' | 'heightM' | 'minElevationDeg' | 'mask'>) {
  return { latitudeDeg, longitudeDeg, heightM, minElevationDeg, mask: mask.map(point => ({ ...point })) }
}

/** The question of an empty form: the interface's defaults, over the coming 24 hours. */
export function blankQuestion(nowMs: number): BenchQuestion {
  return {
    elements: { source: 'held', id: null, text: '' },
    station: { source: 'held', id: null, latitudeDeg: 0, longitudeDeg: 0, heightM: 0, minElevationDeg: 5, mask: [] },
    window: { ...comingDay(nowMs), sampleIntervalS: 10, ut1MinusUtcS: 0 },
    link: { source: 'given', id: null, ...pickLink(benchLink.parse({})) },
    radio: { source: 'given', id: null, ...pickRadio(benchRadio.parse({})) },
    budget: benchBudget.parse({}),
    offsetHz: null,
  }
}
