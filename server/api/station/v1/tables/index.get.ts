import { defineRoute } from '~~/server/http/define-route'
import { serveFeedList } from '~~/server/http/serve-feed-list'

export default defineRoute('GET /api/station/v1/tables', serveFeedList)
