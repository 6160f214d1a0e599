import { listDeliveries } from '~~/server/domain/web-hooks/list-deliveries'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/web-hooks/{id}/deliveries', async ({ db, params, query }) => listDeliveries({ db }, { hookId: params.id, ...query }))
