import { detectors } from '#shared/schemas/links'
import { blankQuestion } from './question'
import type { BenchQuestion } from './question'

/** Longer element text does not travel in the address: servers and mail programs cut such addresses. */
export const longestTextInAddress = 2000

export type Query = Record<string, string>
type Section = Exclude<keyof BenchQuestion, 'offsetHz'>

/** Short names of the fields, for an address that can be read aloud and mailed. */
const names: { readonly [S in Section]: Readonly<Partial<Record<string, string>>> } = {
  elements: { source: 'e', id: 'set', text: 'text' },
  station: { source: 's', id: 'station', latitudeDeg: 'lat', longitudeDeg: 'lon', heightM: 'h', minElevationDeg: 'el', mask: 'mask' },
  window: { from: 'from', to: 'to', sampleIntervalS: 'dt', ut1MinusUtcS: 'dut1' },
  link: { source: 'l', id: 'link', direction: 'way', carrierHz: 'f', symbolRateHz: 'rs', detector: 'det', permittedLossDb: 'loss', limitHz: 'lim', captureRangeHz: 'cap', filterBandwidthHz: 'bw', rolloff: 'ro', driftLimitHzPerS: 'drift', jumpLimitHz: 'jump', errorRate: 'ber', esN0Db: 'esn0', bandwidthHz: 'sweep', spreadingFactor: 'sf', turnaround: 'turn' },
  radio: { source: 'r', id: 'radio', stepHz: 'step', offsetHz: 'grid', minDwellS: 'dwell', latencyMs: 'late', latencyUncertaintyMs: 'jit', ramp: 'ramp', slopeStepHzPerS: 'sstep', maxSlopeHzPerS: 'smax' },
  budget: { clockErrorMs: 'clock', alongTrackSigmaS: 'along', spacecraftPpm: 'sppm', stationPpm: 'gppm', ut1BoundS: 'but1', k: 'k' },
}
/** Fields that hold one of a few words. */
const words: Readonly<Record<string, readonly string[]>> = { source: ['held', 'given'], direction: ['uplink', 'downlink'], detector: detectors }
const textual = new Set(['id', 'text', 'from', 'to'])

interface MaskPoint { azimuthDeg: number, elevationDeg: number }
const writeMask = (mask: readonly MaskPoint[]) => mask.map(({ azimuthDeg, elevationDeg }) => `${azimuthDeg}:${elevationDeg}`).join('_')
function readMask(text: string): MaskPoint[] {
  return [...text.matchAll(/(?:^|_)(-?[\d.]+):(-?[\d.]+)(?=_|$)/g)]
    .map(([, azimuth, elevation]) => ({ azimuthDeg: Number(azimuth), elevationDeg: Number(elevation) }))
    .filter(point => Number.isFinite(point.azimuthDeg) && Number.isFinite(point.elevationDeg))
}

type Turnaround = NonNullable<BenchQuestion['link']['turnaround']>
/** 240:221:1, the last whether the uplink is pre-compensated; behind it the nominal uplink, where one is given. */
const writeTurnaround = ({ numerator, denominator, uplinkPrecompensated, uplinkHz }: Turnaround) =>
  `${numerator}:${denominator}:${uplinkPrecompensated ? 1 : 0}${uplinkHz === null ? '' : `:${uplinkHz}`}`
function readTurnaround(text: string): Turnaround | null {
  const [, numerator, denominator, compensated, uplinkHz] = /^(\d{1,6}):(\d{1,6}):([01])(?::([\d.]{1,16}))?$/.exec(text) ?? []
  if (numerator === undefined) return null
  return { numerator: Number(numerator), denominator: Number(denominator), uplinkPrecompensated: compensated === '1', uplinkHz: uplinkHz === undefined ? null : Number(uplinkHz) }
}
const written = (field: string, value: unknown): string => {
  if (value === null || value === undefined || Number.isNaN(value)) return ''
  if (Array.isArray(value)) return writeMask(value as MaskPoint[])
  return field === 'turnaround' ? writeTurnaround(value as Turnaround) : String(value)
}

/** The question as query parameters; what stands at its default is left out, the window apart, which moves with the clock. */
export function toAddress(question: BenchQuestion): Query {
  const blank = blankQuestion(0)
  const query: Query = {}
  const put = (name: string, value: unknown, usual: unknown, field = name) => {
    const text = written(field, value)
    if (text !== (Array.isArray(usual) ? '' : String(usual ?? ''))) query[name] = text
  }
  for (const [section, fields] of Object.entries(names)) {
    const values = question[section as Section] as Record<string, unknown>
    const usual = blank[section as Section] as Record<string, unknown>
    for (const [field, name] of Object.entries(fields)) put(name!, values[field], section === 'window' && textual.has(field) ? '' : usual[field], field)
  }
  if (question.elements.text.length > longestTextInAddress) delete query.text
  put('hz', question.offsetHz, null)
  return query
}

/** The question that an address asks. What an address leaves out, or says wrongly, is as in an empty form. */
export function fromAddress(query: Readonly<Record<string, unknown>>, nowMs: number): BenchQuestion {
  const question = blankQuestion(nowMs)
  for (const [section, fields] of Object.entries(names)) {
    const values = question[section as Section] as Record<string, unknown>
    for (const [field, name] of Object.entries(fields)) {
      const written = query[name!]
      if (typeof written === 'string') values[field] = readField(field, written, values[field])
    }
  }
  if (typeof query.hz === 'string') question.offsetHz = numberOr(query.hz, null)
  return question
}

function readField(field: string, written: string, usual: unknown): unknown {
  if (field === 'mask') return readMask(written)
  if (field === 'turnaround') return readTurnaround(written)
  if (field === 'ramp') return written === 'true'
  if (words[field]) return words[field].includes(written) ? written : usual
  if (textual.has(field)) return written === '' && usual === null ? null : written
  return written === '' ? null : numberOr(written, usual)
}

function numberOr<T>(written: string, usual: T): number | T {
  const value = Number(written)
  return written.trim() !== '' && Number.isFinite(value) ? value : usual
}
