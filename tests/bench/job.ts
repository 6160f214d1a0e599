import { createEphemeris } from '#shared/physics/orbit/ephemeris'
import { findPasses } from '#shared/physics/orbit/passes'
import { createPropagator } from '#shared/physics/orbit/propagator'
import { createSiteTrack } from '#shared/physics/orbit/site-track'
import { buildTable } from '#shared/physics/predict/build-table'
import { streamPass } from '#shared/physics/predict/sample-pass'
import type { MeanElements, PredictedPass, Site } from '#shared/physics/types'
import { budget, FROM_MS, link, radio } from './fleet'

/** Processor time of this process so far, ms: a machine that does other things at once does not count. */
export function processorMs(): number {
  const { user, system } = process.cpuUsage()
  return (user + system) / 1000
}

/** What one spacecraft's day took of the processor, ms, and what it gave. */
export interface DayOfOne { predictMs: number, tablesMs: number, passes: number, rows: number, tables: number, propagations: number }

/** Passes and curves of one spacecraft over all stations, streamed as the product does it; then a table for each pass where asked. */
export function dayOfOne(elements: MeanElements, sites: readonly Site[], toMs: number, withTables: boolean, visit: (row: Float64Array) => void): DayOfOne {
  const sum: DayOfOne = { predictMs: 0, tablesMs: 0, passes: 0, rows: 0, tables: 0, propagations: 0 }
  let startedMs = processorMs()
  const made = createPropagator(elements)
  if (!made.ok) throw new Error(made.error)
  const propagator = { ...made.propagator, at: (utcMs: number) => {
    sum.propagations++
    return made.propagator.at(utcMs)
  } }
  const ephemeris = createEphemeris(propagator, FROM_MS, toMs)
  const { ut1MinusUtcS } = budget
  const query = { propagator, ephemeris, link, linkMinElevationRad: 0, radio, budget }
  // Asked twice or thrice a spacecraft only: what the processor has done takes the system a tenth of a millisecond to tell.
  const found: { readonly site: Site, readonly passes: readonly PredictedPass[] }[] = []
  for (const site of sites) {
    const { passes } = findPasses({ ephemeris, site, fromMs: FROM_MS, toMs, ut1MinusUtcS })
    const track = createSiteTrack(ephemeris, site, ut1MinusUtcS)
    for (const pass of passes) {
      streamPass(pass, track, { direction: link.direction, carrierHz: link.carrierHz, stepS: 1 }, (row) => {
        sum.rows++
        visit(row)
      })
    }
    sum.passes += passes.length
    found.push({ site, passes })
  }
  sum.predictMs = processorMs() - startedMs
  if (withTables) {
    startedMs = processorMs()
    for (const { site, passes } of found) sum.tables += tablesOf(passes, { ...query, site })
    sum.tablesMs = processorMs() - startedMs
  }
  return sum
}

function tablesOf(passes: readonly PredictedPass[], query: Omit<Parameters<typeof buildTable>[0], 'pass'>): number {
  return passes.filter(pass => buildTable({ ...query, pass }).kind === 'table').length
}
