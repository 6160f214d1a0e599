import { allowanceOf } from '../link/allowance'
import { lossDb } from '../link/loss'
import { statesOf } from '../doppler/needed'
import { receivedOverTransmitted } from '../doppler/ratio'
import { lookAt } from '../orbit/look'
import type { BudgetModel, BudgetParts, CheckedRetune, Hz, LinkModel, Propagator, RadioModel, RetuneRow, Site, Span, TableCheck, UtcMs, Verdict } from '../types'
import type { CheckCurve } from './check-curve'
import { checkCurveOf, directOffsetHz } from './check-curve'
import type { AppliedRow, Fault } from './check-rows'
import { applyRows, faultsOfRows, skyAt } from './check-rows'
import { crossingBetween, everySecond, withPeaks, withTurns } from './check-scan'

export interface CheckQuery {
  readonly propagator: Propagator
  readonly site: Site
  readonly link: LinkModel
  readonly radio: RadioModel
  readonly budget: BudgetModel
  /** Workable parts, in order; at least one. */
  readonly parts: readonly Span[]
  /** As published. */
  readonly rows: readonly RetuneRow[]
  /** No row may take effect inside. */
  readonly quiet?: readonly Span[]
}

/** Margin of a table without any residual. */
export const MARGIN_CAP = 1e6

/**
 * Checks rows as published against what is needed. Shares nothing with the planner but the propagator: it propagates for itself,
 * interpolates in its own way, applies the rows as the radio does (one latency after their instant, through its converter, with their
 * slopes) and asks both sides of every retune, every extreme between, and every second.
 *
 * Budgeted residual = |needed − set| + timing + UT1 + k·√(orbit² + oscillator²), as in the error budget. Margin = allowance / worst
 * budgeted residual; holds from 1.25, tight from 1, breaks below, and breaks with any fault. Before the first row the radio is
 * taken to stand on the carrier. A row that serves no workable instant has residual 0.
 *
 * Throws RangeError without a workable part, or where the propagator fails within one.
 *
 * @card Verdict: what rows leave when they are applied as the radio would, apart from the planner.
 * @formula budgeted residual = |f − g_i − s_i·(t − e_i)| + timing + UT1 + k·spread; margin = allowance/worst; holds ≥ 1.25, tight ≥ 1, breaks below
 * @source mechanics; thresholds are the product’s
 * @units Hz, UTC ms → Hz, margin, verdict
 * @frame sky frequency
 * @range 1 Hz, both sides of every retune, every extreme between; a fault breaks
 * @tolerance 0.05 Hz at 437.5 MHz with one row for the whole pass (plan/check-table.test.ts)
 */
export function checkTable(query: CheckQuery): TableCheck {
  const { link, radio, budget, parts, rows } = query
  if (parts.length === 0) throw new RangeError('There is no workable part to check a table over: give at least one span.')
  const allowance = allowanceOf(link)
  const applied = applyRows(rows, radio)
  const faults = faultsOfRows(rows, applied, link, radio, parts, query.quiet)
  const spans = applied.map(() => ({ min: Infinity, max: -Infinity }))
  let worst: { residualHz: Hz, atMs: UtcMs, parts: BudgetParts } | null = null
  let [slowest, fastest] = [Infinity, -Infinity]
  const excess: { fromMs: UtcMs, toMs: UtcMs }[] = []

  for (const part of parts) {
    const curve = checkCurveOf({ ...query, ut1MinusUtcS: budget.ut1MinusUtcS, span: part })
    const drift = driftFault(curve, part, link, applied)
    if (drift) faults.push(drift)
    for (const piece of piecesOf(part, applied)) {
      const row = applied[piece.row]
      const setHz = (utcMs: UtcMs): Hz => row ? skyAt(row, utcMs) - link.carrierHz : 0
      const slope = row?.skySlopeHzPerS ?? 0
      const partsAt = (utcMs: UtcMs): BudgetParts => ({ stepsHz: curve.offsetHz(utcMs) - setHz(utcMs), ...uncertainAt(curve, utcMs, query) })
      const budgeted = (utcMs: UtcMs) => budgetedHz(partsAt(utcMs), budget.k)
      const instants = withPeaks(withTurns(everySecond(piece.fromMs, piece.toMs), utcMs => curve.rateHzPerS(utcMs) - slope), budgeted)
      let before: { atMs: UtcMs, isOver: boolean } | null = null
      for (const atMs of instants) {
        const at = partsAt(atMs)
        const residualHz = budgetedHz(at, budget.k)
        if (worst === null || residualHz > worst.residualHz) worst = { residualHz, atMs, parts: at }
        const span = spans[piece.row]
        if (span) {
          span.min = Math.min(span.min, at.stepsHz)
          span.max = Math.max(span.max, at.stepsHz)
        }
        const ratioMinusOne = symbolClock(query, curve.offsetHz(atMs), atMs)
        slowest = Math.min(slowest, ratioMinusOne)
        fastest = Math.max(fastest, ratioMinusOne)
        const isOver = residualHz > allowance.allowanceHz
        addExcess(excess, before, { atMs, isOver }, utcMs => budgeted(utcMs) > allowance.allowanceHz)
        before = { atMs, isOver }
      }
    }
  }

  const { residualHz: worstResidualHz, atMs: worstAtMs, parts: worstParts } = worst!
  const margin = Math.min(MARGIN_CAP, worstResidualHz === 0 ? MARGIN_CAP : allowance.allowanceHz / worstResidualHz)
  faults.sort((a, b) => a.atMs - b.atMs)
  return {
    verdict: verdictOf(margin, faults), allowance, worstResidualHz, worstAtMs, budget: worstParts, margin,
    retunes: applied.map((row, i) => checkedRetune(row, spans[i]!, query)),
    excess, faults, symbolClockPpm: [slowest * 1e6, fastest * 1e6],
  }
}

function verdictOf(margin: number, faults: readonly Fault[]): Verdict {
  if (faults.length > 0 || margin < 1) return 'breaks'
  return margin >= 1.25 ? 'holds' : 'tight'
}

/** The part cut at every row's effect; row −1 before the first. Both rows are asked at a retune, so pieces share their ends. */
function piecesOf(part: Span, applied: readonly AppliedRow[]): { row: number, fromMs: UtcMs, toMs: UtcMs }[] {
  const pieces = []
  for (let row = -1; row < applied.length; row++) {
    const fromMs = Math.max(part.fromMs, row < 0 ? -Infinity : applied[row]!.effectMs)
    const toMs = Math.min(part.toMs, applied[row + 1]?.effectMs ?? Infinity)
    // A retune at the very start of a part leaves nothing of the row before it, unless it falls there exactly.
    if (fromMs < toMs || (fromMs === toMs && row >= 0)) pieces.push({ row, fromMs, toMs })
  }
  return pieces
}

function uncertainAt(curve: CheckCurve, utcMs: UtcMs, { budget, radio, link }: CheckQuery): Omit<BudgetParts, 'stepsHz'> {
  const sigmaS = budget.alongTrackSigmaS(utcMs)
  const timingS = (budget.clockErrorMs + radio.latencyUncertaintyMs) / 1000
  // Oscillator figures are limits; a limit L spreads as L/√3. A coherent link has the station's alone, at both ends of the trip.
  const oscillator = link.turnaround ? 0 : Math.sqrt((budget.spacecraftPpm ** 2 + budget.stationPpm ** 2) / 3) / 1e6
  return {
    timingHz: timingS * Math.abs(curve.answerHzPerS(utcMs)),
    ut1Hz: budget.ut1BoundS === 0 ? 0 : budget.ut1BoundS * Math.abs(curve.ut1HzPerS(utcMs)),
    orbitHz: sigmaS === 0 ? 0 : sigmaS * Math.abs(curve.alongTrackHzPerS(utcMs)),
    oscillatorHz: link.carrierHz * oscillator,
    trimHz: 0,
  }
}

function budgetedHz(parts: BudgetParts, k: number): Hz {
  const spread = Math.sqrt(parts.orbitHz ** 2 + parts.oscillatorHz ** 2 + parts.trimHz ** 2)
  return Math.abs(parts.stepsHz) + parts.timingHz + parts.ut1Hz + k * spread
}

function addExcess(excess: { fromMs: UtcMs, toMs: UtcMs }[], before: { atMs: UtcMs, isOver: boolean } | null, now: { atMs: UtcMs, isOver: boolean }, isOver: (utcMs: UtcMs) => boolean): void {
  const add = (fromMs: UtcMs, toMs: UtcMs) => {
    const last = excess[excess.length - 1]
    if (last && last.toMs >= fromMs) last.toMs = Math.max(last.toMs, toMs)
    else excess.push({ fromMs, toMs })
  }
  if (before === null) {
    if (now.isOver) add(now.atMs, now.atMs)
    return
  }
  if (before.isOver && now.isOver) add(before.atMs, now.atMs)
  else if (before.isOver) add(before.atMs, crossingBetween(before.atMs, now.atMs, isOver))
  else if (now.isOver) add(crossingBetween(before.atMs, now.atMs, utcMs => !isOver(utcMs)), now.atMs)
}

/** Largest |ḟ − slope| over a part, both rows asked at a retune, where it is beyond what the loop follows. */
function driftFault(curve: CheckCurve, part: Span, { driftLimitHzPerS }: LinkModel, applied: readonly AppliedRow[]): Fault | null {
  if (driftLimitHzPerS === null) return null
  let [worst, atMs] = [0, part.fromMs]
  for (const { row, fromMs, toMs } of piecesOf(part, applied)) {
    const slope = applied[row]?.skySlopeHzPerS ?? 0
    const drift = (utcMs: UtcMs) => Math.abs(curve.rateHzPerS(utcMs) - slope)
    for (const at of withPeaks(everySecond(fromMs, toMs), drift)) if (drift(at) > worst) [worst, atMs] = [drift(at), at]
  }
  if (worst <= driftLimitHzPerS) return null
  return {
    code: 'drift', atMs,
    message: `What is set drifts from what is needed by ${worst.toFixed(1)} Hz/s at ${new Date(atMs).toISOString()}; the link's loop follows ${driftLimitHzPerS} Hz/s.`,
  }
}

/** Received over transmitted, minus one: the scale of the symbol clock at the receiving end. A coherent spacecraft still counts its symbols by its own clock. */
function symbolClock({ link, propagator, site, budget }: CheckQuery, offsetHz: Hz, utcMs: UtcMs): number {
  if (link.turnaround) return receivedOverTransmitted({ stateAt: statesOf(propagator), site, ut1MinusUtcS: budget.ut1MinusUtcS }, 'downlink', utcMs).ratioMinusOne
  return link.direction === 'downlink' ? offsetHz / link.carrierHz : -offsetHz / (link.carrierHz + offsetHz)
}

function checkedRetune({ row, effectMs }: AppliedRow, span: { min: Hz, max: Hz }, query: CheckQuery): CheckedRetune {
  const { propagator, site, link, budget } = query
  const [residualMinHz, residualMaxHz] = span.min <= span.max ? [span.min, span.max] : [0, 0]
  const state = propagator.at(effectMs)
  if (!state.ok) throw new RangeError(`The element set cannot be propagated to ${new Date(effectMs).toISOString()}: ${state.error}.`)
  const look = lookAt(state, site, effectMs, budget.ut1MinusUtcS)
  return {
    ...row, residualMinHz, residualMaxHz,
    lossDb: lossDb(link, Math.max(Math.abs(residualMinHz), Math.abs(residualMaxHz))),
    dopplerHz: directOffsetHz({ propagator, site, link, ut1MinusUtcS: budget.ut1MinusUtcS }, effectMs),
    rangeRateMps: look.rangeRateMps, azimuthRad: look.azimuthRad, elevationRad: look.elevationRad,
  }
}
