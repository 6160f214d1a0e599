import type { PassSearch } from '../../../shared/physics/orbit/passes'
import type { PredictedPass, Span } from '../../../shared/physics/types'
import type { Seconds, Station } from './by-the-second'
import { DOUBT_RAD } from './by-the-second'

/** Promised: 2 ms; the millisecond beyond is rounding's. */
const EDGE_MS = 3

export interface Held {
  readonly search: PassSearch
  readonly window: Span
  readonly station: Station
  readonly seconds: Seconds
  /** Instants to ask beside the seconds. */
  readonly alsoMs?: readonly number[]
}

/**
 * Holds a search against every second of its window, and every edge, middle and culmination that it names against SGP4
 * itself. Gives what is wrong, in words; empty where nothing is.
 */
export function faultsOf(held: Held): string[] {
  return [...setFaults(held), ...secondFaults(held), ...spanFaults(held), ...passFaults(held)].map(([what, ms]) => `${what} at ${((ms - held.seconds.startMs) / 1000).toFixed(4)} s`)
}

type Fault = readonly [what: string, utcMs: number]

const endOf = ({ search, window }: Held): number => Math.min(window.toMs, search.validUntilMs)

/** First and last second of the window that are inside a span of it. */
function secondsWithin(held: Held, fromMs: number, toMs: number): { readonly first: number, readonly last: number } {
  const { startMs, count } = held.seconds
  return {
    first: Math.ceil((Math.max(fromMs, held.window.fromMs) - startMs) / 1000),
    last: Math.min(count - 1, Math.floor((Math.min(toMs, endOf(held)) - startMs) / 1000)),
  }
}

/** Sine of the elevation at every second inside a span. */
function sinesWithin(held: Held, fromMs: number, toMs: number): Float64Array {
  const { first, last } = secondsWithin(held, fromMs, toMs)
  return held.station.sines.subarray(first, Math.max(first, last + 1))
}

/** +1 workable, −1 not, 0 too near to say. */
function truth({ station }: Held, utcMs: number): number {
  const sky = station.skyAt(utcMs)
  if (!sky) return -1
  return station.isDoubtful(sky) ? 0 : Math.sign(station.clearanceOf(sky))
}

/** The first failure of SGP4 ends a set, be it between two seconds. */
function setFaults(held: Held): Fault[] {
  const { search, window, seconds } = held
  const fails = seconds.failsMs
  if (fails <= window.fromMs) return search.passes.length > 0 || search.endedBy === null ? [['a set is used after it failed', window.fromMs]] : []
  if (fails <= window.toMs && (search.endedBy === null || search.validUntilMs > fails)) return [['a set is used beyond its failure', fails]]
  const isEarly = search.endedBy !== null && search.validUntilMs < Math.min(window.toMs, fails - 1000)
  return isEarly && search.validUntilMs > window.fromMs && seconds.at(search.validUntilMs + 1) !== null ? [['a set ends without an error', search.validUntilMs]] : []
}

function secondFaults(held: Held): Fault[] {
  const { search, station, seconds, window } = held
  const { site, sines } = station
  const spans = search.passes.flatMap(pass => pass.workable)
  const sinPlain = Math.sin(site.minElevationRad)
  const isBare = site.mask.length === 0
  const faults: Fault[] = []
  let next = 0
  const { first, last } = secondsWithin(held, window.fromMs, window.toMs)
  for (let k = first; k <= last; k++) {
    const ms = seconds.startMs + 1000 * k
    while (next < spans.length && spans[next]!.toMs < ms) next++
    const isFound = next < spans.length && spans[next]!.fromMs <= ms
    const isThere = sines[k]! > sinPlain && (isBare || station.clearanceOf(station.skyAtSecond(k)) > 0)
    if (isFound !== isThere && truth(held, ms) !== 0) faults.push([isFound ? 'invented' : 'missed', ms])
  }
  for (const ms of held.alsoMs ?? []) {
    const isFound = spans.some(span => span.fromMs <= ms && ms <= span.toMs)
    // What is shorter than an edge is known to need not be found.
    const around = [-EDGE_MS, 0, EDGE_MS].map(aside => truth(held, ms + aside))
    if (ms > window.fromMs && ms < endOf(held) && around.every(sign => isFound ? sign < 0 : sign > 0)) faults.push([isFound ? 'invented' : 'missed', ms])
  }
  return faults
}

function spanFaults(held: Held): Fault[] {
  const { search, window } = held
  const spans = search.passes.flatMap(pass => pass.workable)
  const endMs = endOf(held)
  const faults: Fault[] = []
  spans.forEach(({ fromMs, toMs }, i) => {
    const isLong = toMs - fromMs > 2 * EDGE_MS
    const [before, after] = [spans[i - 1]?.toMs ?? -Infinity, spans[i + 1]?.fromMs ?? Infinity]
    if (!(toMs > fromMs) || fromMs <= before) faults.push(['spans out of order', fromMs])
    if (fromMs < window.fromMs || toMs > endMs) faults.push(['a span beyond the window', fromMs])
    if (truth(held, (fromMs + toMs) / 2) < 0) faults.push(['invented, middle', (fromMs + toMs) / 2])
    if (fromMs > window.fromMs && fromMs - before > EDGE_MS && truth(held, fromMs - EDGE_MS) > 0) faults.push(['opens late', fromMs])
    if (toMs < endMs && after - toMs > EDGE_MS && truth(held, toMs + EDGE_MS) > 0) faults.push(['closes early', toMs])
    if (isLong && truth(held, fromMs + EDGE_MS) < 0) faults.push(['opens early', fromMs])
    if (isLong && truth(held, toMs - EDGE_MS) < 0) faults.push(['closes late', toMs])
  })
  const isWhole = spans.length === 1 && spans[0]!.fromMs === window.fromMs && spans[0]!.toMs === endMs
  if (search.alwaysVisible !== isWhole) faults.push(['said to be always visible, or not', window.fromMs])
  return faults
}

function passFaults(held: Held): Fault[] {
  const { search, station, window } = held
  const { site } = station
  const clearlyBelow = Math.sin(site.minElevationRad - DOUBT_RAD)
  const clearlyAbove = Math.sin(site.minElevationRad + DOUBT_RAD)
  return search.passes.flatMap((pass: PredictedPass, i): Fault[] => {
    const faults: Fault[] = []
    const later = search.passes[i + 1]
    const inside = sinesWithin(held, pass.aosMs, pass.losMs)
    const sinHighest = inside.reduce((most, sine) => Math.max(most, sine), -1)
    const there = station.skyAt(pass.culminationMs)
    const isParted = !later || later.aosMs - pass.losMs < 2000 || sinesWithin(held, pass.losMs, later.aosMs).some(sine => sine < clearlyAbove)
    if (!isParted) faults.push(['two passes of one arc', pass.losMs])
    if (inside.some(sine => sine < clearlyBelow)) faults.push(['one pass of two arcs', pass.aosMs])
    if (sinHighest > Math.sin(Math.min(Math.PI / 2, pass.maxElevationRad + DOUBT_RAD))) faults.push(['higher than its highest', pass.aosMs])
    if (!there || Math.abs(there.elevation - pass.maxElevationRad) > DOUBT_RAD) faults.push(['another elevation at culmination', pass.culminationMs])
    if (pass.culminationMs < pass.aosMs || pass.culminationMs > pass.losMs) faults.push(['culmination outside the pass', pass.culminationMs])
    if (pass.aosClipped !== (pass.aosMs <= window.fromMs) || pass.losClipped !== (pass.losMs >= endOf(held))) faults.push(['clipped, or not', pass.aosMs])
    return faults
  })
}
