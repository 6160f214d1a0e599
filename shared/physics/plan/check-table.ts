import { allowanceOf } from '../link/allowance'
import { lossDb } from '../link/loss'
import { receivedOverTransmitted } from '../doppler/ratio'
import { lookAt } from '../orbit/look'
import type { BudgetModel, CheckedRetune, Hz, LinkModel, Propagator, RadioModel, RetuneRow, Site, Span, TableCheck, UplinkInUse, UtcMs, Verdict } from '../types'
import type { CheckCurve } from './check-curve'
import { checkCurveOf, directOffsetHz } from './check-curve'
import type { Echo } from './check-echo'
import { echoesOf } from './check-echo'
import type { AppliedRow, Fault } from './check-rows'
import type { Residual, SeenExtremes } from './check-residual'
import { residualOf } from './check-residual'
import { applyRows, faultsOfRows } from './check-rows'
import { crossingBetween, scan } from './check-scan'
import { propagated } from './check-states'

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
  /** Of a coherent link with a pre-compensated uplink: the uplink's own table, whose steps come back. Left out or null: none is known, and nothing is added. */
  readonly uplink?: UplinkInUse | null
}

/** Margin of a table without any residual. */
export const MARGIN_CAP = 1e6

/**
 * Checks rows as published against what is needed. Shares nothing with the planner but the propagator: it propagates for itself,
 * interpolates in its own way, applies the rows as the radio does (one latency after their instant, through its converter, with their
 * slopes) and asks both sides of every retune, every extreme between, and every second.
 *
 * Budgeted residual = |needed − set|, an uplink's returned steps with it, + timing + UT1 + k·√(orbit² + oscillator²), as in the error budget. Margin = allowance / worst
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
  let worst: Residual | null = null
  let [slowest, fastest] = [Infinity, -Infinity]
  const excess: { fromMs: UtcMs, toMs: UtcMs }[] = []

  const curves = parts.map(part => checkCurveOf({ ...query, ut1MinusUtcS: budget.ut1MinusUtcS, span: part }))
  for (const curve of curves) {
    const echoes = echoesOf({ ...query, ut1MinusUtcS: budget.ut1MinusUtcS }, curve)
    const whole = piecesOf(curve.span, applied)
    const pieces = echoes ? whole.flatMap(piece => piecesByEcho(piece, echoes)) : whole
    const residuals = pieces.map(piece => residualOf(curve, applied[piece.row], query, piece.returned))
    const drift = driftFault(link, pieces, residuals)
    if (drift) faults.push(drift)
    for (const [i, piece] of pieces.entries()) {
      const residual = residuals[i]!
      scan(piece.fromMs, piece.toMs, residual.budgetedHz, residual.rateHzPerS)
      const { seen } = residual
      if (worst === null || seen.worstHz > worst.seen.worstHz) worst = residual
      if (seen.worstHz > allowance.allowanceHz) addExcess(excess, piece, allowance.allowanceHz, residual)
      const span = spans[piece.row]
      if (span) {
        span.min = Math.min(span.min, seen.leastStepsHz)
        span.max = Math.max(span.max, seen.mostStepsHz)
      }
      const [slow, fast] = symbolClock(curve, piece, seen, query)
      slowest = Math.min(slowest, slow)
      fastest = Math.max(fastest, fast)
    }
  }

  const { worstHz: worstResidualHz, worstMs: worstAtMs } = worst!.seen
  const margin = Math.min(MARGIN_CAP, worstResidualHz === 0 ? MARGIN_CAP : allowance.allowanceHz / worstResidualHz)
  faults.sort((a, b) => a.atMs - b.atMs)
  return {
    verdict: verdictOf(margin, faults), allowance, worstResidualHz, worstAtMs, budget: worst!.partsAt(worstAtMs), margin,
    retunes: applied.map((row, i) => checkedRetune(row, spans[i]!, query, curves)),
    excess, faults, symbolClockPpm: [slowest * 1e6, fastest * 1e6],
  }
}

function verdictOf(margin: number, faults: readonly Fault[]): Verdict {
  if (faults.length > 0 || margin < 1) return 'breaks'
  return margin >= 1.25 ? 'holds' : 'tight'
}

interface Piece extends Span { readonly row: number, readonly returned: Echo['steps'] }

/** A piece cut where another row of the uplink begins to come back. */
function piecesByEcho(piece: Piece, echoes: readonly Echo[]): Piece[] {
  return echoes.flatMap((echo) => {
    const fromMs = Math.max(piece.fromMs, echo.fromMs)
    const toMs = Math.min(piece.toMs, echo.toMs)
    return fromMs < toMs || (fromMs === toMs && piece.fromMs === piece.toMs) ? [{ row: piece.row, fromMs, toMs, returned: echo.steps }] : []
  })
}

/** The part cut at every row's effect; row −1 before the first. Both rows are asked at a retune, so pieces share their ends. */
function piecesOf(part: Span, applied: readonly AppliedRow[]): Piece[] {
  const pieces: Piece[] = []
  for (let row = -1; row < applied.length; row++) {
    const fromMs = Math.max(part.fromMs, row < 0 ? -Infinity : applied[row]!.effectMs)
    const toMs = Math.min(part.toMs, applied[row + 1]?.effectMs ?? Infinity)
    // A retune at the very start of a part leaves nothing of the row before it, unless it falls there exactly.
    if (fromMs < toMs || (fromMs === toMs && row >= 0)) pieces.push({ row, fromMs, toMs, returned: null })
  }
  return pieces
}

/** Adds where a piece is beyond the allowance, the edges refined. */
function addExcess(excess: { fromMs: UtcMs, toMs: UtcMs }[], { fromMs, toMs }: Span, allowanceHz: Hz, { budgetedHz, rateHzPerS }: Residual): void {
  const add = (overMs: UtcMs, underMs: UtcMs) => {
    const last = excess[excess.length - 1]
    if (last && last.toMs >= overMs) last.toMs = Math.max(last.toMs, underMs)
    else excess.push({ fromMs: overMs, toMs: underMs })
  }
  let before: { readonly atMs: UtcMs, readonly isOver: boolean } | null = null
  scan(fromMs, toMs, budgetedHz, rateHzPerS, (atMs, value) => {
    const isOver = value > allowanceHz
    if (before === null) {
      if (isOver) add(atMs, atMs)
    }
    else if (before.isOver && isOver) add(before.atMs, atMs)
    else if (before.isOver) add(before.atMs, crossingBetween(before.atMs, atMs, utcMs => budgetedHz(utcMs) > allowanceHz))
    else if (isOver) add(crossingBetween(before.atMs, atMs, utcMs => budgetedHz(utcMs) <= allowanceHz), atMs)
    before = { atMs, isOver }
  })
}

/** Largest |ḟ − slope| over a part, both rows asked at a retune, where it is beyond what the loop follows. */
function driftFault({ driftLimitHzPerS }: LinkModel, pieces: readonly Piece[], residuals: readonly Residual[]): Fault | null {
  if (driftLimitHzPerS === null) return null
  let [worst, worstMs] = [0, pieces[0]!.fromMs]
  for (const [i, { fromMs, toMs }] of pieces.entries()) {
    const { rateHzPerS } = residuals[i]!
    scan(fromMs, toMs, utcMs => Math.abs(rateHzPerS(utcMs)), null, (atMs, drift) => {
      if (drift > worst) [worst, worstMs] = [drift, atMs]
    })
  }
  if (worst <= driftLimitHzPerS) return null
  return {
    code: 'drift', atMs: worstMs,
    message: `What is set drifts from what is needed by ${worst.toFixed(1)} Hz/s at ${new Date(worstMs).toISOString()}; the link's loop follows ${driftLimitHzPerS} Hz/s.`,
  }
}

/**
 * Received over transmitted, minus one, least and greatest: the scale of the symbol clock at the receiving end, which goes with the
 * offset. A coherent spacecraft still counts its symbols by its own clock.
 */
function symbolClock({ stateAt }: CheckCurve, { fromMs, toMs }: Span, { leastOffsetHz, mostOffsetHz }: SeenExtremes, { link, site, budget }: CheckQuery): [slowest: number, fastest: number] {
  const { carrierHz, direction, turnaround } = link
  if (turnaround) {
    const path = { stateAt, site, ut1MinusUtcS: budget.ut1MinusUtcS }
    const ends: [slowest: number, fastest: number] = [Infinity, -Infinity]
    scan(fromMs, toMs, utcMs => receivedOverTransmitted(path, 'downlink', utcMs).ratioMinusOne, null, (_, ratio) => {
      ends[0] = Math.min(ends[0], ratio)
      ends[1] = Math.max(ends[1], ratio)
    })
    return ends
  }
  return direction === 'downlink'
    ? [leastOffsetHz / carrierHz, mostOffsetHz / carrierHz]
    : [-mostOffsetHz / (carrierHz + mostOffsetHz), -leastOffsetHz / (carrierHz + leastOffsetHz)]
}

/** Outside the workable parts a row's own instant is propagated directly. */
function checkedRetune({ row, effectMs }: AppliedRow, span: { min: Hz, max: Hz }, query: CheckQuery, curves: readonly CheckCurve[]): CheckedRetune {
  const { propagator, site, link, budget: { ut1MinusUtcS } } = query
  const [residualMinHz, residualMaxHz] = span.min <= span.max ? [span.min, span.max] : [0, 0]
  const curve = curves.find(({ span: { fromMs, toMs } }) => fromMs <= effectMs && effectMs <= toMs)
  const look = lookAt(curve?.stateAt(effectMs) ?? propagated(propagator, effectMs), site, effectMs, ut1MinusUtcS)
  return {
    atMs: row.atMs, frequencyHz: row.frequencyHz, slopeHzPerS: row.slopeHzPerS, residualMinHz, residualMaxHz,
    lossDb: lossDb(link, Math.max(Math.abs(residualMinHz), Math.abs(residualMaxHz))),
    dopplerHz: curve ? curve.offsetHz(effectMs) : directOffsetHz({ propagator, site, link, ut1MinusUtcS }, effectMs),
    rangeRateMps: look.rangeRateMps, azimuthRad: look.azimuthRad, elevationRad: look.elevationRad,
  }
}
