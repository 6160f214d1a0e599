import { and, arrayContains, asc, eq, isNotNull, isNull, or } from 'drizzle-orm'
import type { z } from 'zod'
import type { changePersonBody } from '#shared/schemas/people'
import type { Db } from '~~/server/database/client'
import { people } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { endSessionsOf } from '../auth/end-sessions'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { difference, touches } from '../difference'
import { DomainError } from '../errors'
import type { PersonListed } from './read-people'
import { getPerson } from './read-people'

type Person = typeof people.$inferSelect

/** Changes a person. New roles and disabling end every session at once; the last active administrator stays one. */
export async function changePerson(deps: Deps, id: string, { disabled, ...input }: z.output<typeof changePersonBody>): Promise<PersonListed> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const locked = await lockWithAdministrators(tx, id)
    const present = requireFound(locked.find(person => person.id === id), 'person')
    const change = difference<Person>(present, {
      ...input,
      ...(input.roles ? { roles: [...new Set(input.roles)] } : {}),
      ...(disabled === undefined ? {} : { disabledAt: disabled ? present.disabledAt ?? deps.now : null }),
    })
    if (!change) return
    const merged = { ...present, ...change.after }
    if (isActiveAdministrator(present) && !isActiveAdministrator(merged) && !locked.some(person => person.id !== id && isActiveAdministrator(person))) {
      throw new DomainError('conflict', `${present.name} is the last active administrator: make somebody else an administrator first.`)
    }
    await tx.update(people).set(change.after).where(eq(people.id, id))
    if (touches(change, ['roles', 'disabledAt'])) await endSessionsOf(inner, id)
    await recordAudit(inner, { action: 'person.change', entityKind: 'person', entityId: id, ...change })
  })
  return getPerson(deps, id)
}

const isActiveAdministrator = (person: Person) => person.disabledAt === null && person.passwordHash !== null && person.roles.includes('administrator')

/** Two administrators who disable each other at once must see each other's change: all are locked, in one order. */
function lockWithAdministrators(tx: Db, id: string): Promise<Person[]> {
  return tx.select().from(people)
    .where(or(eq(people.id, id), and(arrayContains(people.roles, ['administrator']), isNull(people.disabledAt), isNotNull(people.passwordHash))))
    .orderBy(asc(people.id)).for('update')
}
