import { randomUUID } from 'node:crypto'
import type { z } from 'zod'
import type { BenchPredictOut } from '#shared/schemas/bench'
import { benchPredictBody, benchPredictOut } from '#shared/schemas/bench'
import type { Actor, Deps } from '~~/server/domain/context'
import { predictBench } from '~~/server/domain/bench/predict-bench'

export const reader: Actor = { kind: 'key', id: randomUUID(), name: 'Bench', scope: 'read', stationId: null }
/** Nothing that is sent inline asks the database. */
export const deps: Deps = { db: null as unknown as Deps['db'], actor: reader, now: new Date('2026-11-30T18:00:00Z') }

/** The bench as a program meets it: the body through its schema, the answer held to its schema. */
export async function bench(body: z.input<typeof benchPredictBody>, given: Deps = deps): Promise<BenchPredictOut> {
  return benchPredictOut.parse(await predictBench(given, benchPredictBody.parse(body)))
}
