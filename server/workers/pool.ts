import { existsSync } from 'node:fs'
import { availableParallelism } from 'node:os'
import { fileURLToPath } from 'node:url'
import Piscina from 'piscina'
import type { TaskInput, TaskName, TaskOutput } from './tasks'

let pool: Piscina | null = null

/** The bundle lies beside the built server; the development server and tests name it by NULLBEAT_WORKER. */
function workerFile(): string | null {
  const candidates = [process.env.NULLBEAT_WORKER, fileURLToPath(new URL('./workers/predict.mjs', import.meta.url)), fileURLToPath(new URL('../workers/predict.mjs', import.meta.url)), fileURLToPath(new URL('../../workers/predict.mjs', import.meta.url))]
  return candidates.find((file): file is string => !!file && existsSync(file)) ?? null
}

/** Thrown when a task is stopped at its time limit, or outgrows its thread's memory. */
export class TaskTooHeavy extends Error {}

/**
 * Runs a task in a worker thread. Without a bundle (unit tests) it runs here. A task that others' input makes heavy is
 * given `limitMs`; past it its thread is ended and TaskTooHeavy thrown.
 */
export async function runTask<N extends TaskName>(name: N, input: TaskInput<N>, { limitMs }: { limitMs?: number } = {}): Promise<TaskOutput<N>> {
  if (!pool) {
    const filename = workerFile()
    if (!filename) {
      const { default: run } = await import('./predict')
      return run({ name, input })
    }
    pool = new Piscina({ filename, maxThreads: Math.max(1, availableParallelism()), idleTimeout: 30_000, resourceLimits: { maxOldGenerationSizeMb: 512 } })
  }
  try {
    return await pool.run({ name, input }, limitMs === undefined ? {} : { signal: AbortSignal.timeout(limitMs) })
  }
  catch (error) {
    if (error instanceof Error && (error.name === 'AbortError' || (error as { code?: unknown }).code === 'ERR_WORKER_OUT_OF_MEMORY')) throw new TaskTooHeavy(`${name} was stopped`)
    throw error
  }
}

export async function closePool(): Promise<void> {
  await pool?.destroy()
  pool = null
}
