import type { Deps } from '../context'
import type { PredictionOutcome } from '../prediction/recheck-outcome'
import { publishedTableBreaks } from './published-table-breaks'
import { raiseCause } from './raise-cause'
import { reconcileAlerts } from './reconcile-alerts'

/** Called inside a prediction's transaction: what it shows to be wrong raises its alert with it, not a minute later. */
export async function afterPrediction(deps: Deps, outcome: PredictionOutcome): Promise<void> {
  const broken = await publishedTableBreaks(deps, outcome)
  if (broken) await raiseCause(deps, broken)
  await reconcileAlerts(deps, { kinds: ['residual-ahead'], spacecraftId: outcome.spacecraftId })
}
