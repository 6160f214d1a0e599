import { listQuietSpans } from '~~/server/domain/quiet-spans/list-quiet-spans'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/quiet-spans', async ({ db, query }) => listQuietSpans({ db }, query))
