import { createNeededFrequency } from '#shared/physics/doppler/needed'
import { answeringLink, withOscillatorsOf } from '#shared/physics/doppler/two-way'
import { partialAlongTrackHzPerS, partialUt1HzPerS } from '#shared/physics/orbit/along-track'
import { createEphemeris } from '#shared/physics/orbit/ephemeris'
import { lookAt } from '#shared/physics/orbit/look'
import { horizonRad } from '#shared/physics/orbit/mask'
import { createPropagator } from '#shared/physics/orbit/propagator'
import { budgetAt, uncertaintyHz } from '#shared/physics/plan/budget'
import type { MeanElements, Site, UtcMs } from '#shared/physics/types'
import { budgetModelOf } from './budget-model'
import type { LinkTask } from './predict-station'
import { isoOf } from './stored-table'

export interface PassSamplesInput {
  elements: MeanElements
  site: Site
  ut1MinusUtcS: number
  aosMs: UtcMs
  culminationMs: UtcMs
  losMs: UtcMs
  stepS: number
  links: LinkTask[]
}
export interface PassSamplesOutput {
  samples: { at: string, azimuthDeg: number, elevationDeg: number, horizonDeg: number, rangeM: number, rangeRateMps: number }[]
  links: { linkId: string, dopplerHz: number[], dopplerRateHzPerS: number[], uncertaintyHz: number[] }[]
}

const DEG_PER_RAD = 180 / Math.PI

/** AOS, every step from there, culmination and LOS, in whole milliseconds and in order. */
function timesOf({ aosMs, culminationMs, losMs, stepS }: PassSamplesInput): UtcMs[] {
  const times = new Set([aosMs, culminationMs, losMs])
  for (let k = 1; aosMs + k * stepS * 1000 < losMs; k++) times.add(Math.round(aosMs + k * stepS * 1000))
  return [...times].sort((a, b) => a - b)
}

/** The curves of a pass: what antenna and radio see at each sample, and what the uncertainties leave open on each link. */
export function passSamples(input: PassSamplesInput): PassSamplesOutput {
  const { elements, site, ut1MinusUtcS } = input
  const created = createPropagator(elements)
  if (!created.ok) return { samples: [], links: [] }
  const ephemeris = createEphemeris(created.propagator, input.aosMs, input.losMs)
  const times = timesOf(input).filter(utcMs => utcMs <= ephemeris.toMs)
  return {
    samples: times.map((utcMs) => {
      const look = lookAt(ephemeris.stateAt(utcMs)!, site, utcMs, ut1MinusUtcS)
      return {
        at: isoOf(utcMs),
        azimuthDeg: look.azimuthRad * DEG_PER_RAD,
        elevationDeg: look.elevationRad * DEG_PER_RAD,
        horizonDeg: horizonRad(site, look.azimuthRad) * DEG_PER_RAD,
        rangeM: look.rangeM,
        rangeRateMps: look.rangeRateMps,
      }
    }),
    links: input.links.map(({ linkId, model: { direction, carrierHz, turnaround = null }, radioModel, budget: parameters }) => {
      const path = { stateAt: ephemeris.stateAt, site, ut1MinusUtcS, direction, carrierHz, turnaround }
      const needed = createNeededFrequency(path)
      const answering = answeringLink(path)
      const answer = createNeededFrequency(answering)
      const budget = withOscillatorsOf(budgetModelOf(parameters), path)
      const dopplerRateHzPerS = times.map(needed.rateHzPerS)
      return {
        linkId,
        dopplerHz: times.map(needed.dopplerHz),
        dopplerRateHzPerS,
        uncertaintyHz: times.map((utcMs, i) => uncertaintyHz(budgetAt({
          utcMs, carrierHz, rateHzPerS: answering === path ? dopplerRateHzPerS[i]! : answer.rateHzPerS(utcMs), alongTrackHzPerS: partialAlongTrackHzPerS(answering, utcMs), ut1HzPerS: partialUt1HzPerS(answering, utcMs),
        }, budget, radioModel), budget.k)),
      }
    }),
  }
}
