import { listServers } from '~~/server/domain/servers/list-servers'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/servers', async ({ db }) => listServers({ db }))
