import { repeatDelivery } from '~~/server/domain/web-hooks/repeat-delivery'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/web-hook-deliveries/{id}/repeat', async ({ db, actor, now, params }) => repeatDelivery({ db, actor, now }, params.id))
