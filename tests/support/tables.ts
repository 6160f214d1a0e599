import { createEphemeris } from '../../shared/physics/orbit/ephemeris'
import { findPasses } from '../../shared/physics/orbit/passes'
import type { BuiltTable, TableQuery } from '../../shared/physics/predict/build-table'
import { buildTable } from '../../shared/physics/predict/build-table'
import type { BudgetModel, LinkModel, PredictedPass, RadioModel } from '../../shared/physics/types'
import { propagatorOf, referencePasses } from './reference-data'
import { elementsFromLines, siteFromDegrees } from './reference-elements'

/** A link, a radio and a budget as a small station might have them. */
export const uhfLink: LinkModel = {
  direction: 'downlink', carrierHz: 437.5e6, symbolRateHz: 9600, detector: 'quadrature', permittedLossDb: 0.5,
  captureRangeHz: null, filterBandwidthHz: null, rolloff: null, driftLimitHzPerS: null, jumpLimitHz: null, limitHz: null,
  errorRate: 1e-5, esN0Db: 20, bandwidthHz: null, spreadingFactor: null, bandLowHz: null, bandHighHz: null,
}
export const steppedRadio: RadioModel = { stepHz: 10, offsetHz: 0, minDwellS: 1, latencyMs: 50, latencyUncertaintyMs: 5 }
export const smallBudget: BudgetModel = {
  clockErrorMs: 10, ut1MinusUtcS: 0, ut1BoundS: 0.05, alongTrackSigmaS: () => 0.06, spacecraftPpm: 0.5, stationPpm: 0.05, k: 2,
}

/** A reference orbit over a reference station for its first day, with its passes. */
export function dayOf(satelliteId: string, stationId: string, minElevationDeg = 5) {
  const { satellites, stations } = referencePasses()
  const satellite = satellites.find(s => s.id === satelliteId)!
  const propagator = propagatorOf(elementsFromLines(satellite.line1, satellite.line2))
  const fromMs = Date.parse(satellite.windowStart)
  const toMs = fromMs + 86_400_000
  const ephemeris = createEphemeris(propagator, fromMs, toMs)
  const site = siteFromDegrees(stations.find(s => s.id === stationId)!, minElevationDeg)
  const { passes } = findPasses({ ephemeris, site, fromMs, toMs, ut1MinusUtcS: 0 })
  return { propagator, ephemeris, site, passes }
}

/** The highest pass that lies wholly in the day. */
export const highest = (passes: readonly PredictedPass[]): PredictedPass =>
  passes.filter(pass => !pass.aosClipped && !pass.losClipped).reduce((most, next) => next.maxElevationRad > most.maxElevationRad ? next : most)

/** A table that the test takes to be workable. */
export function tableOf(query: TableQuery): BuiltTable {
  const built = buildTable(query)
  if (built.kind !== 'table') throw new Error('The pass is not workable')
  return built
}
