import { alongTrackSigmaS } from '#shared/physics/accuracy/prior'
import type { BudgetModel } from '#shared/physics/types'
import type { BudgetParameters } from '~~/server/domain/prediction/models'

/** Functions do not cross to a worker: the spread over time is made here from its figures. */
export function budgetModelOf({ alongTrack, ...figures }: BudgetParameters): BudgetModel {
  return { ...figures, alongTrackSigmaS: alongTrackSigmaS(alongTrack) }
}
