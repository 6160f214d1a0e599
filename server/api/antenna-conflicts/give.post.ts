import { giveAntenna } from '~~/server/domain/antennas/give-antenna'
import { requirePerson } from '~~/server/domain/tables/require-person'
import { defineRoute } from '~~/server/http/define-route'

export default defineRoute('POST /api/antenna-conflicts/give', async ({ db, actor, now, body }) => giveAntenna({ db, actor: requirePerson(actor), now }, body))
