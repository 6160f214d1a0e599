import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('GET /api/auth/me', async ({ actor: { id, name, email, roles, zone } }) => ({ id, name, email, roles, zone }))
