import type { Hz, LinkModel, RadioModel, RetuneRow, Span, TableCheck, UtcMs } from '../types'

export type Fault = TableCheck['faults'][number]

/** A published row as the radio applies it, with what its dial comes to in the sky from the instant of effect. */
export interface AppliedRow { readonly row: RetuneRow, readonly effectMs: UtcMs, readonly skyHz: Hz, readonly skySlopeHzPerS: number }

/**
 * A command takes effect one latency after its instant, in the order of time. A converter adds its oscillator to the dial; one that
 * inverts takes the dial from its oscillator, and a rising dial then falls in the sky.
 *
 * @card Rows in effect: when each published row takes effect, and what it sets in the sky.
 * @formula effect = at + latency; sky = dial, f_LO + dial, or f_LO − dial where the converter inverts, its slope then negated
 * @source mechanics
 * @units UTC ms, ms, Hz, Hz/s → UTC ms, Hz, Hz/s
 * @frame dial → sky frequency
 * @range any rows, put in order of time
 * @tolerance exact: late rows and forgotten converters are caught (plan/check-table.test.ts, predict/converter.test.ts)
 */
export function applyRows(rows: readonly RetuneRow[], radio: RadioModel): AppliedRow[] {
  const { converter, latencyMs } = radio
  const sign = converter?.inverts ? -1 : 1
  return rows.map(row => ({
    row, effectMs: row.atMs + latencyMs, skyHz: (converter?.loHz ?? 0) + sign * row.frequencyHz, skySlopeHzPerS: sign * row.slopeHzPerS,
  })).sort((a, b) => a.effectMs - b.effectMs)
}

/**
 * Sky frequency at an instant while the row is in effect.
 *
 * @card Setting in the sky: where a row’s dial puts the radio while it is in effect.
 * @formula g + s·(t − e)
 * @source mechanics
 * @units UTC ms → Hz
 * @frame sky frequency
 * @range from the row’s instant of effect on
 * @tolerance exact: a slope of the wrong sign is caught (predict/ramps.test.ts)
 */
export const skyAt = ({ effectMs, skyHz, skySlopeHzPerS }: AppliedRow, utcMs: UtcMs): Hz => skyHz + skySlopeHzPerS * (utcMs - effectMs) / 1000

const instant = (utcMs: UtcMs) => new Date(utcMs).toISOString()

/**
 * What is wrong with rows whatever the residual: `order`, `late`, `off-grid`, `slope`, `band`, `dwell`, `jump`, `quiet`. Drift needs
 * the curve and is asked beside the residual.
 *
 * @card Faults of rows: what breaks a table whatever its residual.
 * @formula order, first row in time, grid, slope, band, dwell, jump, quiet spans, each against the radio’s and the link’s limits
 * @source mechanics of the radio
 * @units Hz, UTC ms, s → named faults
 * @frame sky frequency
 * @range grid to 1e-4 of a step, dwell to 1 µs
 * @tolerance every injected fault is caught (plan/check-table.test.ts, predict/ramps.test.ts, predict/quiet.test.ts)
 */
export function faultsOfRows(rows: readonly RetuneRow[], applied: readonly AppliedRow[], link: LinkModel, radio: RadioModel, parts: readonly Span[], quiet: readonly Span[] = []): Fault[] {
  const faults: Fault[] = []
  const fault = (code: string, atMs: UtcMs, message: string) => faults.push({ code, atMs, message })

  rows.forEach((row, i) => {
    if (i > 0 && row.atMs <= rows[i - 1]!.atMs) fault('order', row.atMs, `The row at ${instant(row.atMs)} does not come after the row before it: put rows in order of time.`)
  })
  const begins = parts[0]!.fromMs
  if (applied.length === 0 || applied[0]!.effectMs > begins) {
    fault('late', begins, `No row is in effect at ${instant(begins)}, when the workable part begins: command the first row earlier.`)
  }
  for (const [i, applies] of applied.entries()) {
    const { row, effectMs } = applies
    const beside = nearestGridHz(row.frequencyHz, radio)
    if (Math.abs(beside - row.frequencyHz) > Math.max(1e-4 * radio.stepHz, 2e-6)) {
      fault('off-grid', row.atMs, `The radio cannot be set to ${row.frequencyHz} Hz; its nearest setting is ${beside} Hz.`)
    }
    const slope = slopeFault(row.slopeHzPerS, radio)
    if (slope) fault('slope', row.atMs, slope)
    if (quiet.some(span => span.fromMs <= effectMs && effectMs <= span.toMs)) {
      fault('quiet', row.atMs, `The retune takes effect at ${instant(effectMs)}, inside a span in which none may: command it before or after.`)
    }
    const radiated = row.slopeHzPerS === 0 ? [effectMs] : extremesOf(effectMs, applied[i + 1]?.effectMs ?? Infinity, parts)
    const outside = link.direction === 'uplink' ? radiated.map(at => skyAt(applies, at)).find(skyHz => isOutside(skyHz, link)) : undefined
    if (outside !== undefined) {
      fault('band', row.atMs, `${outside} Hz lies outside the licensed band, ${link.bandLowHz ?? 'no lower edge'} to ${link.bandHighHz ?? 'no upper edge'} Hz.`)
    }
  }
  for (let i = 1; i < applied.length; i++) {
    const [before, after] = [applied[i - 1]!, applied[i]!]
    const heldMs = after.effectMs - before.effectMs
    if (heldMs < radio.minDwellS * 1000 - 1e-3) {
      fault('dwell', after.row.atMs, `The setting before is held for ${Math.round(heldMs)} ms; the radio needs ${radio.minDwellS * 1000} ms between commands.`)
    }
    const jumpHz = Math.abs(after.skyHz - skyAt(before, after.effectMs))
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

/** What is wrong with a slope on this radio; null for nothing. */
function slopeFault(slopeHzPerS: number, { ramp }: RadioModel): string | null {
  if (slopeHzPerS === 0) return null
  if (!ramp) return 'This radio steps and cannot follow a slope: give rows without one.'
  if (Math.abs(slopeHzPerS) > ramp.maxSlopeHzPerS * (1 + 1e-9)) return `The radio ramps by ${ramp.maxSlopeHzPerS} Hz/s at most, not by ${slopeHzPerS} Hz/s.`
  const steps = slopeHzPerS / ramp.slopeStepHzPerS
  return Math.abs(steps - Math.round(steps)) > 1e-4 ? `The radio ramps in steps of ${ramp.slopeStepHzPerS} Hz/s and cannot ramp by ${slopeHzPerS} Hz/s.` : null
}

/** First and last instant of what a row serves of the workable parts: a ramp is furthest at one of them. */
function extremesOf(fromMs: UtcMs, toMs: UtcMs, parts: readonly Span[]): UtcMs[] {
  const served = parts.filter(part => part.toMs >= fromMs && part.fromMs <= toMs)
  return served.length === 0 ? [] : [Math.max(fromMs, served[0]!.fromMs), Math.min(toMs, served[served.length - 1]!.toMs)]
}

function isOutside(frequencyHz: Hz, { bandLowHz, bandHighHz }: LinkModel): boolean {
  return (bandLowHz !== null && frequencyHz < bandLowHz) || (bandHighHz !== null && frequencyHz > bandHighHz)
}
