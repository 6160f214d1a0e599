import { sql } from 'drizzle-orm'
import type { PredictStationOutput } from '~~/server/workers/tasks/predict-station'
import { runTask } from '~~/server/workers/pool'
import { afterPrediction } from '../alerts/after-prediction'
import type { Deps } from '../context'
import { systemActor } from '../context'
import type { PairIds, PairInputs } from './load-inputs'
import { fingerprint, loadInputs } from './load-inputs'
import type { KnownPass } from './load-known'
import { knownFingerprint, loadKnown, lockTables } from './load-known'
import { mergePrediction } from './merge-prediction'
import type { PredictionOutcome } from './recheck-outcome'
import { windowStart, workerInputOf } from './worker-input'
import { writePrediction } from './write-prediction'

const MOST_TRIES = 3
/** Shorter than the database takes to look for a deadlock (1 s): a computation gives way to publications and decisions. */
const LOCK_PATIENCE_MS = 500
const MOST_WAITS = 8

export interface PredictionRequest extends PairIds {
  /** Goes to the tables that change, in words. */
  reason: string
}

/**
 * Computes the coming passes of one spacecraft over one station and the tuning tables of its links, and joins them to
 * what is known. The computing runs in a worker, outside the transaction; what it was made with is compared again under
 * a lock on the pair, and what has changed meanwhile leads to another try.
 */
export async function predictStation({ db, now }: Pick<Deps, 'db' | 'now'>, request: PredictionRequest): Promise<PredictionOutcome> {
  const from = windowStart(now)
  for (let tries = 0; tries < MOST_TRIES; tries++) {
    const inputs = await loadInputs({ db, now }, request)
    const known = await loadKnown({ db }, request, from)
    const predicted = await compute(inputs, known, now)
    const outcome = await givingWay(() => db.transaction(async (tx) => {
      await tx.execute(sql.raw(`SET LOCAL lock_timeout = ${LOCK_PATIENCE_MS}`))
      await tx.execute(sql`SELECT pg_advisory_xact_lock(hashtextextended(${`${request.spacecraftId}:${request.stationId}`}, 0))`)
      await lockTables({ db: tx }, known.flatMap(pass => pass.tables.map(table => table.id)))
      const knownNow = await loadKnown({ db: tx }, request, from)
      const isCurrent = knownFingerprint(knownNow) === knownFingerprint(known)
        && fingerprint(await loadInputs({ db: tx, now }, request)) === fingerprint(inputs)
      return isCurrent ? join({ db: tx, now, actor: systemActor }, request, inputs, knownNow, predicted) : null
    }))
    if (outcome) return outcome
  }
  throw new StillChanging('What the prediction is made with kept changing: try again when the changes are done.')
}

/** Nothing is wrong: whoever changes things asks anew, and the queue tries again. */
export class StillChanging extends Error {}

/** Tries again what could not get its locks in time; what has been computed stays good meanwhile, or is found not to be. */
async function givingWay<T>(act: () => Promise<T>): Promise<T> {
  for (let waits = 1; ; waits++) {
    try {
      return await act()
    }
    catch (error) {
      if (waits === MOST_WAITS || !isLockTimeout(error)) throw error
    }
  }
}

function isLockTimeout(error: unknown): boolean {
  for (let cause = error; cause instanceof Error; cause = cause.cause) {
    if ((cause as { code?: unknown }).code === '55P03') return true
  }
  return false
}

function compute(inputs: PairInputs, known: readonly KnownPass[], now: Date): Promise<PredictStationOutput> | null {
  if (!inputs.set || inputs.stopped) return null
  return runTask('predict-station', workerInputOf({ ...inputs, set: inputs.set }, known, now))
}

async function join(deps: Deps, { spacecraftId, stationId, reason }: PredictionRequest, inputs: PairInputs, known: readonly KnownPass[], predicted: PredictStationOutput | null): Promise<PredictionOutcome> {
  const merge = mergePrediction({ inputs, known, predicted, reason, now: deps.now })
  await writePrediction(deps, merge)
  const outcome: PredictionOutcome = {
    spacecraftId,
    stationId,
    reason,
    passes: { added: merge.passInserts.length, changed: merge.passChanges.length, gone: merge.gonePassIds.length },
    revisions: { drafted: merge.revisionInserts.length, recomputed: merge.revisionChanges.filter(change => change.rows).length, lapsed: merge.lapses.length },
    rechecks: merge.rechecks,
  }
  await afterPrediction(deps, outcome)
  return outcome
}
