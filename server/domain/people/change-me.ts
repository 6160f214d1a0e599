import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { PersonOut, changeMeBody } from '#shared/schemas/people'
import { people } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps, PersonActor } from '../context'
import { difference } from '../difference'

/** One's own name and zone. */
export async function changeMe(deps: Deps<PersonActor>, input: z.output<typeof changeMeBody>): Promise<PersonOut> {
  const { id, name, email, roles, zone } = deps.actor
  const change = difference<{ name: string, zone: string }>({ name, zone }, input)
  if (change) {
    await deps.db.transaction(async (tx) => {
      await tx.update(people).set(change.after).where(eq(people.id, id))
      await recordAudit({ ...deps, db: tx }, { action: 'person.change', entityKind: 'person', entityId: id, ...change })
    })
  }
  return { id, name, email, roles, zone, ...change?.after }
}
