import type { Deps } from '~~/server/domain/context'
import { DomainError } from '~~/server/domain/errors'
import { predictStation } from '~~/server/domain/prediction/predict-station'
import type { Jobs } from './queue'

/** Computes one pair's passes and tables. A pair that has been deleted since needs nothing. */
export async function runPredict(deps: Pick<Deps, 'db' | 'now'>, data: Jobs['predict']): Promise<void> {
  try {
    await predictStation(deps, data)
  }
  catch (error) {
    if (!(error instanceof DomainError && error.code === 'not-found')) throw error
  }
}
