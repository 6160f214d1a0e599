import type { BenchPredictOut } from '#shared/schemas/bench'
import { formatHz } from '#shared/utils/format'
import { stripData } from '../passes/strips'
import type { StripData } from '../passes/strips'

export type BenchPass = BenchPredictOut['passes'][number]
export type BenchTable = NonNullable<BenchPass['table']>

/** An answer with those figures of its question that are needed to read it, kept as they were when it was asked. */
export interface Asked {
  readonly answer: BenchPredictOut
  readonly carrierHz: number
  readonly direction: 'uplink' | 'downlink'
  readonly latencyMs: number
  /** Of a held radio; rows are then for its dial. */
  readonly converter: { readonly loHz: number, readonly inverts: boolean } | null
  readonly k: number
  /** Of the asked question; another one in the form means that the answer is to a former one. */
  readonly key: string
}

/** A pass of the bench as the strips of a pass draw it; null without a table. */
export function benchStrips({ samples, table }: BenchPass, { carrierHz, latencyMs, converter }: Pick<Asked, 'carrierHz' | 'latencyMs' | 'converter'>): StripData | null {
  if (!table) return null
  const curve = { linkId: 'bench', tableId: null, dopplerHz: samples.map(sample => sample.dopplerHz), dopplerRateHzPerS: samples.map(sample => sample.dopplerRateHzPerS), uncertaintyHz: samples.map(sample => sample.uncertaintyHz) }
  return stripData({ samples, links: [curve] }, { linkId: 'bench', carrierHz, allowanceHz: table.allowanceHz, retunes: table.retunes, workable: table.workable, radio: { latencyMs, converter } })
}

/** What the window cuts off, in words; empty where it cuts nothing. */
export function clippedWords({ aosClipped, losClipped }: Pick<BenchPass, 'aosClipped' | 'losClipped'>): string {
  if (aosClipped && losClipped) return 'cut at both ends of the window'
  if (aosClipped) return 'already up when the window begins'
  return losClipped ? 'still up when the window ends' : ''
}

const hz = (value: number) => formatHz(value, Number.isInteger(value) ? 0 : 1)

/** A link in a line: "downlink 437 500 000 Hz, 9 600 symbols/s, quadrature". */
export function linkWords(link: { direction: string, carrierHz: number, symbolRateHz: number, detector: string }): string {
  return `${link.direction} ${hz(link.carrierHz)} Hz, ${hz(link.symbolRateHz)} symbols/s, ${link.detector}`
}

interface RadioFigures {
  stepHz: number
  minDwellS: number
  latencyMs: number
  maxSlopeHzPerS?: number | null
  ramp?: boolean
  ramps?: boolean
  planMode?: string
  cadenceS?: number | null
  converterLoHz?: number | null
}

/** A radio in a line: "10 Hz steps, 1 s between retunes, 50 ms latency", and what it has beside. */
export function radioWords(radio: RadioFigures): string {
  const parts = [
    `${hz(radio.stepHz)} Hz steps`,
    radio.planMode === 'cadence' ? `a retune every ${radio.cadenceS} s` : `${radio.minDwellS} s between retunes`,
    `${radio.latencyMs} ms latency`,
    (radio.ramp ?? radio.ramps) && `ramps to ${radio.maxSlopeHzPerS} Hz/s`,
    (radio.converterLoHz ?? null) !== null && `converter at ${hz(radio.converterLoHz!)} Hz`,
  ]
  return parts.filter(Boolean).join(', ')
}

/** The uncertainties in a line: those that are not zero. */
export function budgetWords(budget: { clockErrorMs: number, alongTrackSigmaS: number, spacecraftPpm: number, stationPpm: number, ut1BoundS: number }): string {
  const parts = [
    budget.clockErrorMs > 0 && `clock ${budget.clockErrorMs} ms`,
    budget.alongTrackSigmaS > 0 && `orbit ${budget.alongTrackSigmaS} s`,
    (budget.spacecraftPpm > 0 || budget.stationPpm > 0) && `oscillators ${budget.spacecraftPpm} and ${budget.stationPpm} ppm`,
    budget.ut1BoundS > 0 && `UT1 ${budget.ut1BoundS} s`,
  ].filter(Boolean)
  return parts.length ? parts.join(', ') : 'every uncertainty 0'
}

/** Things under the heading that each belongs to, headings in the order in which they first come. */
export function underHeadings<T extends { id: string }>(things: readonly T[], heading: (thing: T) => string, name: (thing: T) => string): { name: string, options: { id: string, name: string }[] }[] {
  const groups = new Map<string, { id: string, name: string }[]>()
  for (const thing of things) groups.set(heading(thing), [...groups.get(heading(thing)) ?? [], { id: thing.id, name: name(thing) }])
  return [...groups].map(([of, options]) => ({ name: of, options }))
}
