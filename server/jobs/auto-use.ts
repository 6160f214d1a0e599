import type { Deps } from '~~/server/domain/context'
import { autoUse } from '~~/server/domain/elements/auto-use'
import type { Jobs } from './queue'

/** Lets the rule of one spacecraft judge what waits for it. */
export async function runAutoUse(deps: Pick<Deps, 'db' | 'now'>, data: Jobs['auto-use']): Promise<void> {
  await autoUse(deps, data)
}
