import { createNeededFrequency, statesOf } from '#shared/physics/doppler/needed'
import { partialAlongTrackHzPerS, partialUt1HzPerS } from '#shared/physics/orbit/along-track'
import { createEphemeris } from '#shared/physics/orbit/ephemeris'
import { findPasses } from '#shared/physics/orbit/passes'
import { createPropagator } from '#shared/physics/orbit/propagator'
import { budgetAt, uncertaintyHz } from '#shared/physics/plan/budget'
import { budgetModelOf } from '~~/server/workers/tasks/budget-model'
import type { PairInputs } from '../prediction/load-inputs'

const horizonMs = 24 * 3_600_000
/** A pass that starts sooner would be gone before anybody has looked at it. */
const soonestMs = 45 * 60_000

/**
 * What each pass of the coming day asks of a link at the very least, Hz: its uncertainty, half of what the frequency
 * moves in one dwell, and half a step of the radio, where they are largest together.
 */
export function needsAhead(inputs: PairInputs, linkId: string, nowMs: number): number[] {
  const served = inputs.served.find(({ link }) => link.id === linkId)
  const made = inputs.set && createPropagator(inputs.set.elements)
  if (!served || !made?.ok) return []
  const { propagator } = made
  const budget = budgetModelOf(served.budget)
  const path = { stateAt: statesOf(propagator), site: inputs.site, ut1MinusUtcS: inputs.ut1.ut1MinusUtcS, direction: served.model.direction, carrierHz: served.model.carrierHz }
  const { rateHzPerS } = createNeededFrequency(path)
  const search = findPasses({ ephemeris: createEphemeris(propagator, nowMs, nowMs + horizonMs), site: inputs.site, fromMs: nowMs + soonestMs, toMs: nowMs + horizonMs, ut1MinusUtcS: inputs.ut1.ut1MinusUtcS })
  return search.passes.filter(pass => !pass.aosClipped && !pass.losClipped).map((pass) => {
    let worst = 0
    for (let utcMs = pass.aosMs; utcMs <= pass.losMs; utcMs += 2000) {
      const at = { utcMs, carrierHz: path.carrierHz, rateHzPerS: rateHzPerS(utcMs), alongTrackHzPerS: partialAlongTrackHzPerS(path, utcMs), ut1HzPerS: partialUt1HzPerS(path, utcMs) }
      const held = Math.abs(at.rateHzPerS) * served.radioModel.minDwellS / 2 + served.radioModel.stepHz / 2
      worst = Math.max(worst, held + uncertaintyHz(budgetAt(at, budget, served.radioModel), budget.k))
    }
    return worst
  })
}

/** A limit between the two largest: one table breaks. Or, a quarter above their middle: the worst is tight, none breaks. */
export function limitFor(outcome: 'breaks' | 'tight', needs: readonly number[]): number | null {
  const [largest, second] = [...needs].sort((a, b) => b - a)
  if (largest === undefined) return null
  const middle = (largest + (second ?? largest / 2)) / 2
  return Math.round(outcome === 'breaks' ? middle : Math.max(middle / 0.8, largest * 1.02))
}
