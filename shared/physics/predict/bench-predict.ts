import { createEphemeris } from '../orbit/ephemeris'
import { horizonRad } from '../orbit/mask'
import { findPasses } from '../orbit/passes'
import { createPropagator } from '../orbit/propagator'
import { createSiteTrack } from '../orbit/site-track'
import type { BudgetModel, LinkModel, MeanElements, PredictedPass, PropagationError, RadioModel, Site, Span, TableCheck, UtcMs } from '../types'
import { buildTable, exactUncertainty } from './build-table'
import type { PassSample } from './sample-pass'
import { samplePass } from './sample-pass'

/** All of a what-if, as plain data. */
export interface BenchProblem {
  readonly elements: MeanElements
  readonly site: Site
  readonly fromMs: UtcMs
  readonly toMs: UtcMs
  readonly sampleIntervalS: number
  readonly link: LinkModel
  readonly linkMinElevationRad: number
  readonly radio: RadioModel
  readonly budget: Omit<BudgetModel, 'alongTrackSigmaS'> & { readonly alongTrackSigmaS: number }
  readonly mostSamples: number
}

export interface BenchSample extends PassSample {
  /** Mask and minimum elevation at the sample's azimuth, the link's own minimum included. */
  readonly horizonRad: number
  /** Budget beyond the steps: timing + UT1 + k·spread. */
  readonly uncertaintyHz: number
}

export interface BenchPass {
  /** AOS, culmination and LOS to the whole millisecond. */
  readonly pass: PredictedPass
  readonly samples: readonly BenchSample[]
  /** Null where the pass has no instant above the link's own minimum elevation. */
  readonly table: TableCheck | null
  /** Workable part of the pass for the link; empty where there is no table. */
  readonly parts: readonly Span[]
}

export type BenchAnswer =
  | { readonly kind: 'passes', readonly passes: readonly BenchPass[], readonly endedBy: PropagationError | null, readonly validUntilMs: UtcMs }
  | { readonly kind: 'unusable', readonly error: PropagationError }
  | { readonly kind: 'too-many-samples', readonly count: number }

/**
 * Passes of one element set over one station, each with its samples and a planned and checked tuning table. The same
 * parts that the product's own tables are made of. SGP4's failure at the epoch, or more samples than `mostSamples`,
 * is an answer of its own; failure inside the window ends the passes there.
 *
 * @card What-if: passes with samples and tables of one set over one station.
 * @formula the cards above, one after the other
 * @source the cards of each
 * @units as the cards
 * @frame as the cards
 * @range until the set ends; so many samples at most
 * @tolerance as the tables’ own: the same parts (predict/build-table.test.ts)
 */
export function benchPredict(problem: BenchProblem): BenchAnswer {
  const { site, link, radio, fromMs, toMs, sampleIntervalS } = problem
  const made = createPropagator(problem.elements)
  if (!made.ok) return { kind: 'unusable', error: made.error }
  const { propagator } = made
  const { ut1MinusUtcS } = problem.budget
  const ephemeris = createEphemeris(propagator, fromMs, toMs)
  const { passes, endedBy, validUntilMs } = findPasses({ ephemeris, site, fromMs, toMs, ut1MinusUtcS })

  const count = passes.reduce((sum, pass) => sum + Math.floor((pass.losMs - pass.aosMs) / (sampleIntervalS * 1000)) + 3, 0)
  if (count > problem.mostSamples) return { kind: 'too-many-samples', count }

  const budget: BudgetModel = { ...problem.budget, alongTrackSigmaS: () => problem.budget.alongTrackSigmaS }
  const { direction, carrierHz } = link
  const uncertainty = exactUncertainty(createSiteTrack(ephemeris, site, ut1MinusUtcS), link, budget, radio)
  return {
    kind: 'passes', endedBy, validUntilMs,
    passes: passes.map((exact) => {
      // Samples bear whole milliseconds: in half of one the range rate of a low pass moves by 0.05 m/s.
      const pass = wholeMilliseconds(exact, Math.floor(ephemeris.toMs))
      const samples = samplePass(pass, { ephemeris, site, direction, carrierHz, ut1MinusUtcS, stepS: sampleIntervalS }).map(sample => ({
        ...sample, horizonRad: horizonRad(site, sample.azimuthRad, problem.linkMinElevationRad), uncertaintyHz: uncertainty(sample.atMs),
      }))
      const table = buildTable({ propagator, ephemeris, site, link, linkMinElevationRad: problem.linkMinElevationRad, radio, budget, pass: exact })
      return table.kind === 'table' ? { pass, samples, table: table.check, parts: table.parts } : { pass, samples, table: null, parts: [] }
    }),
  }
}

function wholeMilliseconds(pass: PredictedPass, lastMs: UtcMs): PredictedPass {
  const losMs = Math.min(Math.round(pass.losMs), lastMs)
  const aosMs = Math.min(Math.round(pass.aosMs), losMs)
  return { ...pass, aosMs, losMs, culminationMs: Math.min(Math.max(Math.round(pass.culminationMs), aosMs), losMs) }
}
