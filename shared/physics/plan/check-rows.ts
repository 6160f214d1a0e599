import type { Hz, LinkModel, RadioModel, RetuneRow, Span, TableCheck, UtcMs } from '../types'

export type Fault = TableCheck['faults'][number]

/** A published row as the radio applies it. */
export interface AppliedRow { readonly row: RetuneRow, readonly effectMs: UtcMs }

/**
 * A command takes effect one latency after its instant, in the order of time.
 *
 * @card Rows in effect: when each published row takes effect.
 * @formula effect = at + latency
 * @source mechanics
 * @units UTC ms, ms → UTC ms
 * @frame none
 * @range any rows, put in order of time
 * @tolerance exact: late rows are caught (plan/check-table.test.ts)
 */
export function applyRows(rows: readonly RetuneRow[], radio: RadioModel): AppliedRow[] {
  return rows.map(row => ({ row, effectMs: row.atMs + radio.latencyMs })).sort((a, b) => a.effectMs - b.effectMs)
}

const instant = (utcMs: UtcMs) => new Date(utcMs).toISOString()

/**
 * What is wrong with rows whatever the residual: `order`, `late`, `off-grid`, `slope`, `band`, `dwell`, `jump`. Drift is the
 * curve's, not the rows'.
 *
 * @card Faults of rows: what breaks a table whatever its residual.
 * @formula order, first row in time, grid, slope, band, dwell, jump, each against the radio’s and the link’s limits
 * @source mechanics of the radio
 * @units Hz, UTC ms, s → named faults
 * @frame sky frequency
 * @range grid to 1e-4 of a step, dwell to 1 µs
 * @tolerance every injected fault is caught (plan/check-table.test.ts)
 */
export function faultsOfRows(rows: readonly RetuneRow[], applied: readonly AppliedRow[], link: LinkModel, radio: RadioModel, parts: readonly Span[]): Fault[] {
  const faults: Fault[] = []
  const fault = (code: string, atMs: UtcMs, message: string) => faults.push({ code, atMs, message })

  rows.forEach((row, i) => {
    if (i > 0 && row.atMs <= rows[i - 1]!.atMs) fault('order', row.atMs, `The row at ${instant(row.atMs)} does not come after the row before it: put rows in order of time.`)
  })
  const begins = parts[0]!.fromMs
  if (applied.length === 0 || applied[0]!.effectMs > begins) {
    fault('late', begins, `No row is in effect at ${instant(begins)}, when the workable part begins: command the first row earlier.`)
  }
  for (const { row } of applied) {
    const beside = nearestGridHz(row.frequencyHz, radio)
    if (Math.abs(beside - row.frequencyHz) > Math.max(1e-4 * radio.stepHz, 2e-6)) {
      fault('off-grid', row.atMs, `The radio cannot be set to ${row.frequencyHz} Hz; its nearest setting is ${beside} Hz.`)
    }
    if (row.slopeHzPerS !== 0) fault('slope', row.atMs, 'This radio steps and cannot follow a slope: give rows without one.')
    if (link.direction === 'uplink' && isOutside(row.frequencyHz, link)) {
      fault('band', row.atMs, `${row.frequencyHz} Hz lies outside the licensed band, ${link.bandLowHz ?? 'no lower edge'} to ${link.bandHighHz ?? 'no upper edge'} Hz.`)
    }
  }
  for (let i = 1; i < applied.length; i++) {
    const [before, after] = [applied[i - 1]!, applied[i]!]
    const heldMs = after.effectMs - before.effectMs
    if (heldMs < radio.minDwellS * 1000 - 1e-3) {
      fault('dwell', after.row.atMs, `The setting before is held for ${Math.round(heldMs)} ms; the radio needs ${radio.minDwellS * 1000} ms between commands.`)
    }
    const jumpHz = Math.abs(after.row.frequencyHz - before.row.frequencyHz)
    const listens = parts.some(part => part.fromMs <= after.effectMs && after.effectMs <= part.toMs)
    if (link.jumpLimitHz !== null && listens && jumpHz > link.jumpLimitHz + 2e-6) {
      fault('jump', after.row.atMs, `The retune jumps by ${jumpHz} Hz; the link bears ${link.jumpLimitHz} Hz at once.`)
    }
  }
  return faults
}

function nearestGridHz(frequencyHz: Hz, radio: RadioModel): Hz {
  return radio.offsetHz + Math.round((frequencyHz - radio.offsetHz) / radio.stepHz) * radio.stepHz
}

function isOutside(frequencyHz: Hz, { bandLowHz, bandHighHz }: LinkModel): boolean {
  return (bandLowHz !== null && frequencyHz < bandLowHz) || (bandHighHz !== null && frequencyHz > bandHighHz)
}
