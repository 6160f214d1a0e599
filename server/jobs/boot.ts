import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { describeError } from '~~/server/http/describe-error'
import { log } from '~~/server/http/log'

let chain: Promise<void> = Promise.resolve()

/**
 * Runs the steps of a start one after the other, in the order in which they were asked for. A step that fails, because
 * the database is not there yet, is tried again until it succeeds or the process stops.
 */
export function bootStep(name: string, step: () => Promise<void>): void {
  chain = chain.then(async () => {
    while (!lifecycle.stopping) {
      try {
        return await step()
      }
      catch (error) {
        log.error({ step: name, error: describeError(error) }, 'a step of the start failed; it is tried again')
        await new Promise(resolve => setTimeout(resolve, 2000))
      }
    }
  })
}

/** A process that only works jobs: the heavy ones, so that servers keep answering. */
export const isWorker = () => process.env.NULLBEAT_ROLE === 'worker'

/** Whether this process serves: not while pages are rendered ahead at build time, and not without a database. */
export const serves = () => !import.meta.prerender && !!process.env.DATABASE_URL
