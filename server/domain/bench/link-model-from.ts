import type { z } from 'zod'
import type { LinkModel } from '#shared/physics/types'
import type { benchLink } from '#shared/schemas/bench'

/** The link of a what-if; it has no licensed band. */
export function linkModelFrom(link: z.output<typeof benchLink>): LinkModel {
  const { direction, carrierHz, symbolRateHz, detector, permittedLossDb, captureRangeHz, filterBandwidthHz, rolloff, driftLimitHzPerS, jumpLimitHz, limitHz, errorRate, esN0Db, bandwidthHz, spreadingFactor } = link
  return { direction, carrierHz, symbolRateHz, detector, permittedLossDb, captureRangeHz, filterBandwidthHz, rolloff, driftLimitHzPerS, jumpLimitHz, limitHz, errorRate, esN0Db, bandwidthHz, spreadingFactor, bandLowHz: null, bandHighHz: null }
}
