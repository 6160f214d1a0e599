import type { PassSamplesOut, TableOut } from '#shared/schemas/tables'
import type { Point } from '../charts/paths'
import { lastAtOrBefore, linearAt, valueAt } from './curve'
import type { Curve } from './curve'

/** Where the radio stands from an instant on, as an offset from the carrier. */
export interface Setting { readonly effectMs: number, readonly setHz: number, readonly slopeHzPerS: number }
export interface SpanMs { readonly fromMs: number, readonly toMs: number }

/** What the three strips of a pass draw, before any scale. */
export interface StripData {
  readonly fromMs: number
  readonly toMs: number
  /** Needed offset from the carrier, Hz. */
  readonly needed: Curve
  /** Budget beyond the steps, Hz. */
  readonly uncertaintyHz: readonly number[]
  readonly elevationDeg: readonly number[]
  readonly horizonDeg: readonly number[]
  readonly settings: readonly Setting[]
  /** The settings' instants of effect, in order. */
  readonly effectMs: readonly number[]
  readonly workable: readonly SpanMs[]
  readonly allowanceHz: number
}

/** Signed residual and the budget beyond the steps at an instant. */
export interface ResidualPoint { readonly t: number, readonly y: number, readonly u: number }

type TableParts = Pick<TableOut, 'linkId' | 'carrierHz' | 'allowanceHz' | 'retunes' | 'workable'> & { radio: Pick<TableOut['radio'], 'latencyMs'> & Partial<Pick<TableOut['radio'], 'converter'>> }

/** Curves and table of one link brought to one scale: milliseconds, and hertz from the carrier; null without samples of that link. */
export function stripData({ samples, links }: Pick<PassSamplesOut, 'samples' | 'links'>, table: TableParts): StripData | null {
  const curves = links.find(link => link.linkId === table.linkId)
  if (!curves || samples.length < 2) return null
  const atMs = samples.map(sample => Date.parse(sample.at))
  // A row is commanded at `at` and takes effect one latency later.
  const { latencyMs, converter } = table.radio
  const sign = converter?.inverts ? -1 : 1
  const settings = table.retunes.map(row => ({
    effectMs: Date.parse(row.at) + latencyMs,
    // The dial in the sky: what a converter adds, or takes the dial from. The large figures first, so that nothing is rounded.
    setHz: sign * row.frequencyHz + ((converter?.loHz ?? 0) - table.carrierHz),
    slopeHzPerS: sign * row.slopeHzPerS,
  }))
  return {
    fromMs: atMs[0]!,
    toMs: atMs.at(-1)!,
    needed: { atMs, value: curves.dopplerHz, ratePerS: curves.dopplerRateHzPerS },
    uncertaintyHz: curves.uncertaintyHz,
    elevationDeg: samples.map(sample => sample.elevationDeg),
    horizonDeg: samples.map(sample => sample.horizonDeg),
    settings,
    effectMs: settings.map(setting => setting.effectMs),
    workable: table.workable.map(span => ({ fromMs: Date.parse(span.from), toMs: Date.parse(span.to) })),
    allowanceHz: table.allowanceHz,
  }
}

const settingAt = ({ effectMs, setHz, slopeHzPerS }: Setting, utcMs: number) => setHz + slopeHzPerS * (utcMs - effectMs) / 1000

/** The needed offset as a line. */
export function neededLine({ needed }: StripData): Point[] {
  return needed.atMs.map((t, i) => ({ t, y: needed.value[i]! }))
}

/** The retunes as steps, slanted where a row ramps, from the first that counts to the end of the view. */
export function setLine({ settings, fromMs, toMs }: StripData): Point[] {
  return settings.flatMap((setting, i) => {
    const start = Math.max(fromMs, setting.effectMs)
    const end = Math.min(toMs, settings[i + 1]?.effectMs ?? toMs)
    return end > start ? [{ t: start, y: settingAt(setting, start) }, { t: end, y: settingAt(setting, end) }] : []
  })
}

/** Needed minus set over each workable span: a sawtooth with both sides of every retune. */
export function residualLines(data: StripData): ResidualPoint[][] {
  const { needed, settings, effectMs, uncertaintyHz, workable } = data
  return workable.map(({ fromMs, toMs }) => {
    const effects = effectMs.filter(ms => ms > fromMs && ms < toMs)
    const times = [...new Set([fromMs, ...needed.atMs.filter(ms => ms > fromMs && ms < toMs), ...effects, toMs])].sort((a, b) => a - b)
    const jumps = new Set(effects)
    return times.flatMap((t) => {
      const row = lastAtOrBefore(effectMs, t)
      const rows = jumps.has(t) ? [row - 1, row] : [row]
      const u = linearAt(needed.atMs, uncertaintyHz, t)
      return rows.filter(i => i >= 0).map(i => ({ t, y: valueAt(needed, t) - settingAt(settings[i]!, t), u }))
    })
  })
}

/** The areas in which the budgeted residual lies past the edge, above (+1) or below (−1); each begins and ends on the edge. */
export function pastEdge(points: readonly ResidualPoint[], allowanceHz: number, side: 1 | -1): Point[][] {
  const areas: Point[][] = []
  let previous: ResidualPoint | null = null
  const over = (point: ResidualPoint) => side * point.y + point.u - allowanceHz
  const edge = side * allowanceHz
  for (const point of points) {
    const now = over(point)
    const before = previous ? over(previous) : -1
    const crossingMs = previous ? previous.t + (point.t - previous.t) * before / (before - now) : point.t
    if (now > 0 && !(before > 0)) areas.push([{ t: crossingMs, y: edge }])
    if (now > 0) areas.at(-1)!.push({ t: point.t, y: edge + side * now })
    if (before > 0 && !(now > 0)) areas.at(-1)!.push({ t: crossingMs, y: edge })
    previous = point
  }
  if (previous && over(previous) > 0) areas.at(-1)!.push({ t: previous.t, y: edge })
  return areas
}

/** Largest budgeted residual that the strip must show, Hz. */
export function largestShownHz(lines: readonly (readonly ResidualPoint[])[]): number {
  return lines.reduce((most, points) => points.reduce((value, { y, u }) => Math.max(value, Math.abs(y) + u), most), 0)
}

export interface Reading { utcMs: number, neededHz: number, setHz: number | null, residualHz: number | null, uncertaintyHz: number, elevationDeg: number, row: number, workable: boolean }

/** What the strips say at one instant; the residual is asked for in the workable part only. */
export function readingAt(data: StripData, utcMs: number): Reading {
  const neededHz = valueAt(data.needed, utcMs)
  const row = lastAtOrBefore(data.effectMs, utcMs)
  const setHz = row < 0 ? null : settingAt(data.settings[row]!, utcMs)
  const workable = data.workable.some(span => utcMs >= span.fromMs && utcMs <= span.toMs)
  return {
    utcMs, neededHz, setHz, row, workable,
    residualHz: setHz === null || !workable ? null : neededHz - setHz,
    uncertaintyHz: linearAt(data.needed.atMs, data.uncertaintyHz, utcMs),
    elevationDeg: linearAt(data.needed.atMs, data.elevationDeg, utcMs),
  }
}

/** Spans as far as they reach into a view, in order, those that meet joined. */
export function spansWithin(spans: readonly SpanMs[], view: SpanMs): SpanMs[] {
  const inside = spans.map(span => ({ fromMs: Math.max(span.fromMs, view.fromMs), toMs: Math.min(span.toMs, view.toMs) })).filter(span => span.toMs > span.fromMs).sort((a, b) => a.fromMs - b.fromMs)
  const joined: { fromMs: number, toMs: number }[] = []
  for (const span of inside) {
    const last = joined.at(-1)
    if (last && span.fromMs <= last.toMs) last.toMs = Math.max(last.toMs, span.toMs)
    else joined.push({ ...span })
  }
  return joined
}
