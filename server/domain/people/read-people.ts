import { eq, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { Role } from '#shared/permissions'
import type { personListed } from '#shared/schemas/people'
import { people, sessions } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'
import { requireFound } from '../catalogue/require-row'

export type PersonListed = z.infer<typeof personListed>

const sortName = sql<string>`lower(${people.name})`
const lastSeenAt = sql<string | null>`(SELECT to_char(max(${sessions.lastSeenAt}) AT TIME ZONE 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"') FROM ${sessions} WHERE ${sessions.personId} = people.id)`
const select = (db: Deps['db']) => db.select({ row: people, sortName, lastSeenAt }).from(people).$dynamic()

function toOut({ row, lastSeenAt }: { row: typeof people.$inferSelect, lastSeenAt: string | null }): PersonListed {
  const { id, name, email, roles, zone, disabledAt, passwordHash } = row
  return { id, name, email, roles: roles as Role[], zone, state: disabledAt ? 'disabled' : passwordHash === null ? 'invited' : 'active', lastSeenAt }
}

/** Everybody, by name, with when they were last there. */
export async function listPeople({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string }) {
  const after = readCursor(query.cursor, z.tuple([z.string(), z.uuid()]))
  const rows = await select(db).where(after ? sql`(lower(${people.name}), ${people.id}) > (${after[0]}, ${after[1]}::uuid)` : undefined)
    .orderBy(sortName, people.id).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.sortName, row.row.id])
  return { items: page.rows.map(toOut), nextCursor: page.nextCursor }
}

export async function getPerson({ db }: Pick<Deps, 'db'>, id: string): Promise<PersonListed> {
  const [row] = await select(db).where(eq(people.id, id))
  return toOut(requireFound(row, 'person'))
}
