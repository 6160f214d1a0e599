import type { NeededFrequency } from '../doppler/needed'
import { createNeededFrequency } from '../doppler/needed'
import { createSeenFrequency, seenPartialsInto } from '../doppler/seen-ratio'
import { returnedStepsHz, withOscillatorsOf } from '../doppler/two-way'
import { createSiteTrack } from '../orbit/site-track'
import type { SiteTrack } from '../orbit/site-track'
import { workablePartsForLink } from '../orbit/passes'
import { allowanceOf } from '../link/allowance'
import { uncertaintyBy } from '../plan/budget'
import { checkTable } from '../plan/check-table'
import type { RetuneProblem } from '../plan/plan-retunes'
import { planRetunes } from '../plan/plan-retunes'
import type { BudgetModel, Ephemeris, Hz, LinkModel, PredictedPass, Propagator, RadioModel, RetuneRow, Site, Span, TableCheck, UplinkInUse, UtcMs } from '../types'

export interface TableQuery {
  readonly propagator: Propagator
  /** Of the same element set, over the pass. */
  readonly ephemeris: Ephemeris
  readonly site: Site
  readonly link: LinkModel
  /** The link's own minimum elevation; the site's holds where that is higher. */
  readonly linkMinElevationRad: number
  readonly radio: RadioModel
  readonly budget: BudgetModel
  readonly pass: PredictedPass
  /** One dwell after the radio's previous row, where there is one. */
  readonly notBeforeMs?: UtcMs
  /**
   * How much earlier than needed the first row takes effect, 0 when left out: nothing listens before the pass, and rows that
   * are out stay good when newer elements bring AOS forward.
   */
  readonly firstRowLeadMs?: number
  /** No row takes effect inside. */
  readonly quiet?: readonly Span[]
  /**
   * Of a coherent link with a pre-compensated uplink: the uplink's own table at this station and pass. The plan leaves room for the worst
   * that its steps come back as; the check has them as they come. Left out or null: none is known, and nothing is added.
   */
  readonly uplink?: UplinkInUse | null
}

export interface BuiltTable {
  readonly kind: 'table'
  readonly rows: readonly RetuneRow[]
  readonly check: TableCheck
  readonly parts: readonly Span[]
  /** Share of the allowance the plan keeps to; null where no plan keeps to it. */
  readonly kappa: 0.8 | 1 | null
}

/** The pass has no instant above the link's own minimum elevation. */
export interface NotWorkable { readonly kind: 'not-workable' }

/**
 * The tuning table of one pass and one link: planned on the ephemeris, then checked as published on true propagation.
 *
 * @card Tuning table: planned, then checked as published.
 * @formula workable parts, needed frequency, budget, plan, check; row’s instant = effect − latency
 * @source the cards of each
 * @units UTC ms, Hz → UTC ms, Hz, verdict
 * @frame sky frequency, TEME axes
 * @range a pass above the link’s least elevation
 * @tolerance a plan within four fifths of the allowance is found to hold (predict/build-table.test.ts)
 */
export function buildTable(query: TableQuery): BuiltTable | NotWorkable {
  const { propagator, ephemeris, site, link, radio, budget, pass } = query
  const parts = workablePartsForLink(pass, ephemeris, site, query.linkMinElevationRad, budget.ut1MinusUtcS)
  if (parts.length === 0) return { kind: 'not-workable' }
  const track = createSiteTrack(ephemeris, site, budget.ut1MinusUtcS)
  const { quiet = [], firstRowLeadMs = 0 } = query
  const plan = planRetunes({
    ...onDial(neededOn(track, query), link, radio),
    uncertaintyHz: uncertaintyOf(track, query), allowanceHz: allowanceOf(link).allowanceHz,
    parts, radio, jumpLimitHz: link.jumpLimitHz, driftLimitHzPerS: link.driftLimitHzPerS, quiet, firstRowLeadMs,
    ...(query.notBeforeMs === undefined ? {} : { notBeforeMs: query.notBeforeMs }),
  })
  const rows = plan.rows.map(({ effectMs, frequencyHz, slopeHzPerS }): RetuneRow => ({
    // Exact: planned rows take effect one latency after a whole millisecond.
    atMs: Math.round(effectMs - radio.latencyMs), frequencyHz, slopeHzPerS,
  }))
  return { kind: 'table', rows, check: checkTable({ propagator, site, link, radio, budget, parts, rows, quiet, uplink: query.uplink ?? null }), parts, kappa: plan.kappa }
}

/** What a table is planned along. Two legs, or a carrier that is not what the uplink makes, are asked of the ephemeris itself. */
function neededOn(track: SiteTrack, { ephemeris, site, link, budget }: TableQuery): NeededFrequency {
  const { direction, carrierHz, turnaround = null } = link
  if (!turnaround || (turnaround.uplinkPrecompensated && turnaround.uplinkHz === null)) return createSeenFrequency(track, direction, carrierHz)
  return createNeededFrequency({ stateAt: ephemeris.stateAt, site, ut1MinusUtcS: budget.ut1MinusUtcS, direction, carrierHz, turnaround })
}

/**
 * What is needed and what is licensed, as the radio's dial shows it: |sky − oscillator|, mirrored where the converter inverts. Nothing
 * licenses a downlink's rows.
 */
function onDial(needed: NeededFrequency, { direction, bandLowHz, bandHighHz }: LinkModel, { converter }: RadioModel): Pick<RetuneProblem, 'needed' | 'bandLowHz' | 'bandHighHz'> {
  const [low, high] = direction === 'uplink' ? [bandLowHz, bandHighHz] : [null, null]
  if (!converter) return { needed, bandLowHz: low, bandHighHz: high }
  const { loHz, inverts } = converter
  const dialOf = (skyHz: Hz): Hz => inverts ? loHz - skyHz : skyHz - loHz
  const edge = (skyHz: Hz | null) => skyHz === null ? null : dialOf(skyHz)
  return {
    needed: { frequencyHz: utcMs => dialOf(needed.frequencyHz(utcMs)), rateHzPerS: utcMs => (inverts ? -1 : 1) * needed.rateHzPerS(utcMs) },
    bandLowHz: edge(inverts ? high : low), bandHighHz: edge(inverts ? low : high),
  }
}

export type ResidualQuery = Omit<TableQuery, 'notBeforeMs' | 'firstRowLeadMs'> & { readonly rows: readonly RetuneRow[] }

/**
 * Rows already published, checked anew: against newer elements, another budget, or the same pass as it now falls.
 *
 * @card Rows checked anew: what published rows leave against newer elements.
 * @formula the verdict on rows that stand
 * @source the card of the verdict
 * @units UTC ms, Hz → verdict
 * @frame sky frequency, TEME axes
 * @range a pass above the link’s least elevation
 * @tolerance unchanged while nothing changes (predict/build-table.test.ts)
 */
export function residualOfRows(query: ResidualQuery): TableCheck | NotWorkable {
  const { pass, ephemeris, site, budget } = query
  const parts = workablePartsForLink(pass, ephemeris, site, query.linkMinElevationRad, budget.ut1MinusUtcS)
  return parts.length === 0 ? { kind: 'not-workable' } : checkTable({ ...query, parts })
}

/**
 * Uncertainty at an instant, Hz: timing + UT1 + k·spread.
 *
 * @card Uncertainty at an instant: the budget with its partials taken there.
 * @formula timing + UT1 + k·spread
 * @source the cards of the budget
 * @units UTC ms → Hz
 * @frame the site’s own axes
 * @range within the ephemeris
 * @tolerance within 0.3 % of the checker’s: plans hold (predict/build-table.test.ts)
 */
export function exactUncertainty(track: SiteTrack, link: Pick<LinkModel, 'direction' | 'carrierHz' | 'turnaround'>, budget: BudgetModel, radio: RadioModel): (utcMs: UtcMs) => Hz {
  const { direction, carrierHz } = link
  const counted = withOscillatorsOf(budget, link)
  // Both legs of a coherent link answer alike, whether or not its uplink is pre-compensated.
  const legs = link.turnaround ? 2 : 1
  const summed = uncertaintyBy(carrierHz, counted, radio)
  const partials = new Float64Array(2)
  return (utcMs) => {
    seenPartialsInto(track, direction, legs * carrierHz, utcMs, partials)
    return summed(utcMs, partials[0]!, partials[1]!)
  }
}

/** What is added to the uncertainty, since its partials leave out oblateness and light time. */
const UNCERTAINTY_ROOM = 1.003

/** Uncertainty to plan with: no less than the checker will find. */
function uncertaintyOf(track: SiteTrack, { link, budget, radio, uplink }: TableQuery): (utcMs: UtcMs) => Hz {
  const exact = exactUncertainty(track, link, budget, radio)
  const returnedHz = worstReturnedHz(link, uplink)
  return utcMs => UNCERTAINTY_ROOM * exact(utcMs) + returnedHz
}

/**
 * The most that an uplink's steps may come back as, either way, Hz; 0 where nothing of them is known or nothing comes back.
 *
 * @card Largest returned steps: what a plan leaves room for on a coherent downlink.
 * @formula N/D·max |r_up| over the uplink’s rows
 * @source mechanics; CCSDS 401.0-B
 * @units Hz → Hz
 * @frame none
 * @range pre-compensated uplinks whose table is known
 * @tolerance never less than what the checker finds (predict/returned-steps.test.ts)
 */
export function worstReturnedHz({ turnaround }: Pick<LinkModel, 'turnaround'>, uplink: UplinkInUse | null | undefined): Hz {
  if (!uplink || !turnaround?.uplinkPrecompensated) return 0
  return uplink.retunes.reduce((worst, { residualMinHz, residualMaxHz }) =>
    Math.max(worst, Math.abs(returnedStepsHz(residualMinHz, turnaround)), Math.abs(returnedStepsHz(residualMaxHz, turnaround))), 0)
}
