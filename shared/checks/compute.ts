import { manoeuvreSpreadM } from '../physics/accuracy/manoeuvre-spread'
import { alongTrackSigmaS, perigeeHeightKm } from '../physics/accuracy/prior'
import { createNeededFrequency, dopplerHz, type LinkPath, statesOf, symbolClockPpmAt } from '../physics/doppler/needed'
import { neededOverCarrierMinusOne, receivedOverTransmitted } from '../physics/doppler/ratio'
import { turnedAroundHz } from '../physics/doppler/two-way'
import { allowanceOf } from '../physics/link/allowance'
import { requiredEbN0Db } from '../physics/link/error-rate'
import { loopDriftLimitHzPerS, loopPhaseErrorRad } from '../physics/link/loop'
import { lossDb } from '../physics/link/loss'
import { interSymbolInterferenceDb } from '../physics/link/root-raised-cosine'
import { partialAlongTrackHzPerS, partialUt1HzPerS } from '../physics/orbit/along-track'
import { createEphemeris } from '../physics/orbit/ephemeris'
import { gmstRad, sitePosition, siteStateTeme } from '../physics/orbit/frames'
import { lookAt } from '../physics/orbit/look'
import { findPasses } from '../physics/orbit/passes'
import { trackDifference } from '../physics/orbit/track-difference'
import { budgetAt, uncertaintyHz } from '../physics/plan/budget'
import type { Detector, Direction, LinkModel, Turnaround } from '../physics/types'
import { burnt, cadenceMissHz, closedFormDeviationPercent, planOf } from './compute-longer'
import { circular, DAY_MS, invented500, northern, object00005, overhead, pole, propagatorFor, RADIUS_500_M, siteAt, southern, T0, TILT, toHorizonS } from './examples'
import type { outsideValues } from './values'

export type CheckId = typeof outsideValues[number]['id']

const DEG = 180 / Math.PI
const C = 299_792_458

const plain = {
  direction: 'downlink' as const, carrierHz: 437e6, symbolRateHz: 9600, permittedLossDb: 0.5, captureRangeHz: null, filterBandwidthHz: null, rolloff: null,
  driftLimitHzPerS: null, jumpLimitHz: null, limitHz: null, errorRate: 1e-5, esN0Db: 20, bandwidthHz: null, spreadingFactor: null, bandLowHz: null, bandHighHz: null,
}
const link = (detector: Detector, more: Partial<LinkModel> = {}): LinkModel => ({ ...plain, detector, ...more })
const sBand: Turnaround = { numerator: 240, denominator: 221, uplinkPrecompensated: false, uplinkHz: null }
const loopOf = (noiseBandwidthHz: number) => ({ noiseBandwidthHz, damping: 0.707 })
const loss = (model: LinkModel, epsilon: number): number => lossDb(model, epsilon * model.symbolRateHz) ?? NaN

/** An orbit at 30° from its node against another, tilted and ahead by so many degrees. */
const offTrack = (tiltDeg: number, aheadDeg: number) => trackDifference(circular(TILT, 0, 30 / DEG)(T0), circular(TILT + tiltDeg / DEG, 0, (30 + aheadDeg) / DEG)(T0))

function lookOfInvented() {
  const utcMs = DAY_MS + 890_000
  const state = propagatorFor(invented500).at(utcMs)
  if (!state.ok) throw new Error(state.error)
  return lookAt(state, southern, utcMs, 0)
}

/** Offset at a station of the reference data, `seconds` into its pass. */
function offsetOfInvented(direction: Direction, carrierHz: number, seconds: number): number {
  const path = { stateAt: statesOf(propagatorFor(invented500)), site: northern, ut1MinusUtcS: 0 }
  const utcMs = DAY_MS + 248_000_000 + seconds * 1000
  return carrierHz * (direction === 'downlink' ? receivedOverTransmitted(path, 'downlink', utcMs).ratioMinusOne : neededOverCarrierMinusOne(path, 'uplink', utcMs))
}

/** Along the Earth's axis, over a station that stands still. */
function offsetOverThePole(speedMps: number, link: Pick<LinkPath, 'direction' | 'carrierHz' | 'turnaround'>): number {
  const poleM = siteStateTeme(pole, T0, 0).positionM[2]
  return createNeededFrequency({
    stateAt: utcMs => ({ positionM: [0, 0, poleM + 1e6 + speedMps * (utcMs - T0) / 1000], velocityMps: [0, 0, speedMps] }),
    site: pole, ut1MinusUtcS: 0, ...link,
  }).dopplerHz(T0)
}

function peakRate(carrierHz: number): number {
  const needed = createNeededFrequency({ ...overhead(), direction: 'downlink', carrierHz })
  return Math.max(...Array.from({ length: 41 }, (_, i) => -needed.rateHzPerS(T0 + (i - 20) * 250)))
}

function dilation(): number {
  const distanceM = RADIUS_500_M - siteStateTeme(pole, T0, 0).positionM[2]
  const path = { stateAt: circular(Math.PI / 2, 0, Math.PI / 2), site: pole, ut1MinusUtcS: 0 }
  return 8.2e9 * receivedOverTransmitted(path, 'downlink', T0 + distanceM / C * 1000).ratioMinusOne
}

function equatorialShare(which: number): number {
  const path = { stateAt: circular(0, 0, gmstRad(T0)), site: siteAt(0, 0, 0), ut1MinusUtcS: 0, direction: 'downlink' as const, carrierHz: 437e6 }
  const rate = Math.abs(createNeededFrequency(path).rateHzPerS(T0))
  return (which === 0 ? partialAlongTrackHzPerS(path, T0) : partialUt1HzPerS(path, T0)) / rate
}

function firstPass() {
  const ephemeris = createEphemeris(propagatorFor(invented500), DAY_MS, DAY_MS + 1_800_000)
  const [pass] = findPasses({ ephemeris, site: southern, fromMs: DAY_MS, toMs: DAY_MS + 1_800_000, ut1MinusUtcS: 0 }).passes
  if (!pass) throw new Error('No pass is found where there is one')
  return pass
}

function budgetPart(which: number): number {
  const parts = budgetAt(
    { utcMs: 0, carrierHz: 400e6, rateHzPerS: -150, alongTrackHzPerS: -160, ut1HzPerS: 10 },
    { clockErrorMs: 20, ut1MinusUtcS: 0, ut1BoundS: 0.9, alongTrackSigmaS: () => 0.1, spacecraftPpm: 3, stationPpm: 4, k: 2 },
    { latencyUncertaintyMs: 5 },
  )
  return [parts.timingHz, parts.ut1Hz, parts.orbitHz, parts.oscillatorHz][which] ?? NaN
}

/** What the running code makes of each value from outside; the argument is what it is asked at. */
export const computations: Record<CheckId, (at: number) => number> = {
  'sgp4': (axis) => {
    const state = propagatorFor(object00005).atMinutes(360)
    return state.ok ? (state.positionM[axis] ?? NaN) / 1000 : NaN
  },
  'gmst': () => gmstRad(Date.UTC(1992, 7, 20, 12, 14)) * DEG,
  'site': axis => sitePosition(siteAt(45, 0, 0))[axis] ?? NaN,
  'ut1': (seconds) => {
    const place = (ut1MinusUtcS: number) => siteStateTeme(siteAt(0, 77, 0), T0, ut1MinusUtcS).positionM
    const [before, after] = [place(0), place(seconds)]
    return Math.hypot(before[0] - after[0], before[1] - after[1])
  },
  'burn-orbit': burnt,
  'angles': which => (which === 0 ? lookOfInvented().azimuthRad : lookOfInvented().elevationRad) * DEG,
  'range': () => lookOfInvented().rangeM,
  'range-rate': () => lookOfInvented().rangeRateMps,
  'closed-form': closedFormDeviationPercent,
  'received-uhf': seconds => offsetOfInvented('downlink', 437.5e6, seconds),
  'received-s': seconds => offsetOfInvented('downlink', 2245e6, seconds),
  'received-x': seconds => offsetOfInvented('downlink', 8200e6, seconds),
  'transmit-uhf': seconds => offsetOfInvented('uplink', 437.5e6, seconds),
  'transmit-x': seconds => offsetOfInvented('uplink', 8200e6, seconds),
  'uplink-7': speedMps => offsetOverThePole(speedMps, { direction: 'uplink', carrierHz: 437e6 }),
  'at-horizon': mhz => dopplerHz({ ...overhead(), direction: 'downlink', carrierHz: mhz * 1e6 }, T0 - toHorizonS * 1000),
  'peak-rate': mhz => peakRate(mhz * 1e6),
  'second-order': dilation,
  'turnaround': () => turnedAroundHz(2106.40625e6, sBand) / 1e6,
  'coherent-7': speedMps => offsetOverThePole(speedMps, { direction: 'downlink', carrierHz: 2287.5e6, turnaround: sBand }),
  'symbol-clock': () => symbolClockPpmAt(overhead(), 'downlink', T0 - toHorizonS * 1000),
  'quadrature-loss': epsilon => loss(link('quadrature'), epsilon),
  'quadrature-epsilon': permittedLossDb => allowanceOf(link('quadrature', { permittedLossDb })).epsilon,
  'coherent-epsilon': permittedLossDb => allowanceOf(link('coherent', { permittedLossDb })).epsilon,
  'null': which => 10 ** (-loss(link(which === 0 ? 'quadrature' : 'coherent'), which === 1 ? 0.5 : 1) / 20),
  'half-power': epsilon => loss(link('quadrature'), epsilon),
  'roll-off': epsilon => loss(link('quadrature', { rolloff: 0.35 }), epsilon),
  'interference': epsilon => interSymbolInterferenceDb(epsilon, 0.35),
  'msk': epsilon => loss(link('msk'), epsilon),
  'differential': epsilon => loss(link('differential'), epsilon),
  'fsk': epsilon => loss(link('fsk'), epsilon),
  'multicarrier': epsilon => loss(link('multicarrier'), epsilon),
  'multicarrier-small': epsilon => loss(link('multicarrier', { esN0Db: 40 }), epsilon),
  'loop': noiseBandwidthHz => loopPhaseErrorRad(loopOf(noiseBandwidthHz), 159.3) * DEG,
  'loop-drift': degrees => loopDriftLimitHzPerS(loopOf(20), degrees / DEG),
  'filter': () => allowanceOf(link('quadrature', { filterBandwidthHz: 14_000, rolloff: 0.25 })).allowanceHz,
  'bpsk': requiredEbN0Db,
  'budget': budgetPart,
  'sum': k => uncertaintyHz({ timingHz: 1, ut1Hz: 2, orbitHz: 2, oscillatorHz: 3, trimHz: 6 }, k),
  'split': equatorialShare,
  'age': days => alongTrackSigmaS({ floorKm: 0.5, growthKmPerDay: 1.5, epochMs: T0, speedMps: 7000 })(T0 + days * 86_400_000),
  'burn': days => manoeuvreSpreadM({ startMs: T0, speedSigmaMps: 0.01 }, T0 + days * 86_400_000) / 1000,
  'track': which => which === 0 ? offTrack(0, 0.1).alongM : offTrack(0.1, 0).crossM,
  'height': meanMotionRevPerDay => perigeeHeightKm({ meanMotionRevPerDay, eccentricity: 0 }),
  'rows': slope => planOf(slope).rows,
  'corridor': slope => planOf(slope).furthestPercent,
  'cadence': cadenceMissHz,
  'pass': edge => ((edge === 0 ? firstPass().aosMs : firstPass().losMs) - DAY_MS) / 1000,
  'highest': () => firstPass().maxElevationRad * DEG,
}
