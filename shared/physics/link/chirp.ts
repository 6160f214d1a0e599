import type { Hz, LinkModel } from '../types'
import { positive } from './positive'

type ChirpModel = Pick<LinkModel, 'bandwidthHz' | 'spreadingFactor'>

/**
 * Largest constant offset of a chirp spread over BW: ±BW/4, Hz. A limit, not a curve. Source: common practice.
 * @throws RangeError without a bandwidth
 *
 * @card Chirp’s limit: largest constant offset of a chirp-spread signal.
 * @formula BW/4
 * @source common practice
 * @units Hz → Hz
 * @frame none
 * @range BW above 0
 * @tolerance exact (link/allowance.test.ts)
 */
export function chirpLimitHz({ bandwidthHz }: ChirpModel): Hz {
  if (bandwidthHz === null) throw new RangeError('detector "chirp" needs bandwidthHz: the bandwidth that a chirp sweeps, Hz')
  return positive('bandwidthHz', bandwidthHz) / 4
}

/**
 * Largest drift within one packet: BW/(3·2^SF), Hz, a third of the spacing of its 2^SF frequencies. Over the packet's length it
 * is the link's drift limit, Hz/s. Source: common practice.
 * @throws RangeError without a bandwidth and a spreading factor
 *
 * @card Chirp’s drift: largest drift within a packet.
 * @formula BW/(3·2^SF)
 * @source common practice
 * @units Hz → Hz
 * @frame none
 * @range BW, SF above 0
 * @tolerance exact (link/allowance.test.ts)
 */
export function chirpDriftPerPacketHz({ bandwidthHz, spreadingFactor }: ChirpModel): Hz {
  if (bandwidthHz === null || spreadingFactor === null) throw new RangeError('detector "chirp" needs bandwidthHz and spreadingFactor')
  return positive('bandwidthHz', bandwidthHz) / (3 * 2 ** positive('spreadingFactor', spreadingFactor))
}

/**
 * Symbols a second: BW/2^SF, Hz. Source: the definition of the spreading factor.
 *
 * @card Chirp’s symbol rate: symbols a second.
 * @formula BW/2^SF
 * @source definition of the spreading factor
 * @units Hz → symbols/s
 * @frame none
 * @range BW, SF above 0
 * @tolerance exact (link/allowance.test.ts)
 */
export function chirpSymbolRateHz({ bandwidthHz, spreadingFactor }: ChirpModel): Hz | null {
  return bandwidthHz === null || spreadingFactor === null ? null : bandwidthHz / 2 ** spreadingFactor
}
