import { existsSync } from 'node:fs'
import { availableParallelism } from 'node:os'
import { setTimeout as wait } from 'node:timers/promises'
import { fileURLToPath } from 'node:url'
import type { MessagePort } from 'node:worker_threads'
import Piscina from 'piscina'
import type { TaskInput, TaskName, TaskOutput } from './tasks'

/** Predictions under way are not to keep people waiting for what they have just asked, nor one long what-if everybody else, nor anything an upload. */
const lanes = { 'predict-station': 'jobs', 'read-upload': 'uploads', 'fit-sets': 'uploads', 'compare-sets': 'asked', 'preview-station': 'asked', 'pass-samples': 'asked', 'learn-accuracy': 'asked', 'bench-predict': 'bench' } as const satisfies Record<TaskName, string>
const pools = new Map<string, Piscina>()

/** The bundle lies beside the built server; the development server and tests name it by NULLBEAT_WORKER. */
function workerFile(): string | null {
  const candidates = [process.env.NULLBEAT_WORKER, fileURLToPath(new URL('./workers/predict.mjs', import.meta.url)), fileURLToPath(new URL('../workers/predict.mjs', import.meta.url)), fileURLToPath(new URL('../../workers/predict.mjs', import.meta.url))]
  return candidates.find((file): file is string => !!file && existsSync(file)) ?? null
}

/** Whether there is a bundle to run in threads; without one (unit tests) tasks run here. */
export const hasThreads = (): boolean => workerFile() !== null

/** Thrown when a task is stopped at its time limit, or outgrows its thread's memory. */
export class TaskTooHeavy extends Error {}

/**
 * Runs a task in a worker thread. Without a bundle (unit tests) it runs here. A task that others' input makes heavy is
 * given `limitMs`; past it its thread is ended and TaskTooHeavy thrown.
 */
export async function runTask<N extends TaskName>(name: N, input: TaskInput<N>, { limitMs, transferList }: { limitMs?: number, transferList?: readonly MessagePort[] } = {}): Promise<TaskOutput<N>> {
  const pool = poolOf(lanes[name])
  if (!pool) {
    const { default: run } = await import('./predict')
    return run({ name, input })
  }
  try {
    return await pool.run({ name, input }, { ...(limitMs === undefined ? {} : { signal: AbortSignal.timeout(limitMs) }), ...(transferList ? { transferList } : {}) })
  }
  catch (error) {
    if (error instanceof Error && (error.name === 'AbortError' || (error as { code?: unknown }).code === 'ERR_WORKER_OUT_OF_MEMORY')) throw new TaskTooHeavy(`${name} was stopped`)
    throw error
  }
}

/** A thread that reads an upload is not to hold garbage while there is room for it: the whole server stays within its figure. */
const memoryOf = (lane: string) => lane === 'uploads' ? { maxOldGenerationSizeMb: 288, maxYoungGenerationSizeMb: 8 } : { maxOldGenerationSizeMb: 512 }

function poolOf(lane: string): Piscina | null {
  const known = pools.get(lane)
  if (known) return known
  const filename = workerFile()
  if (!filename) return null
  const pool = new Piscina({ filename, minThreads: 0, maxThreads: Math.max(1, availableParallelism()), idleTimeout: 30_000, resourceLimits: memoryOf(lane) })
  pools.set(lane, pool)
  return pool
}

/** Tasks under way, which somebody waits for, have `patienceMs` to finish; then their threads end. */
export async function closePool(patienceMs = 0): Promise<void> {
  const closing = [...pools.values()]
  pools.clear()
  const finished = Promise.all(closing.map(pool => pool.close()))
  // A thread that is ended makes its close fail, after nobody waits for it any more.
  await Promise.race([finished.catch(() => {}), wait(patienceMs, undefined, { ref: false })])
  await Promise.all(closing.map(pool => pool.destroy()))
}
