import { showProgress } from '~~/server/domain/prediction/show-progress'
import { defineRoute } from '~~/server/http/define-route'

const FRESH_MS = 400
let latest: { readonly askedMs: number, readonly answer: ReturnType<typeof showProgress> } | null = null

/** Every open page asks each second: one question to the database serves them all. */
export default defineRoute('GET /api/predictions/progress', async ({ db }) => {
  const askedMs = performance.now()
  if (!latest || askedMs - latest.askedMs > FRESH_MS) {
    const answer = showProgress({ db })
    latest = { askedMs, answer }
    answer.catch(() => {
      latest = null
    })
  }
  return latest.answer
})
