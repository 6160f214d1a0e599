import { routes } from '#shared/routes'
import { followUpload } from '~~/server/domain/elements/follow-upload'
import { defineRoute } from '~~/server/http/define-route'
import { serveEvents } from '~~/server/http/serve-events'

const route = 'GET /api/element-sets/uploads/{id}/events'

export default defineRoute(route, ({ event, db, params }) =>
  serveEvents(event, { name: 'upload', access: routes[route].access, source: signal => followUpload({ db }, params.id, signal) }))
