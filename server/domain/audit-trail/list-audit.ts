import { and, desc, eq, lt } from 'drizzle-orm'
import { z } from 'zod'
import { audit } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readCursor, toPage } from '../cursor'

/** The trail, newest first, of everything or of one kind or thing. */
export async function listAudit({ db }: Pick<Deps, 'db'>, query: { limit: number, cursor?: string, entityKind?: string, entityId?: string }) {
  const after = readCursor(query.cursor, z.tuple([z.number().int()]))
  const rows = await db.select().from(audit)
    .where(and(
      after ? lt(audit.id, after[0]) : undefined,
      query.entityKind === undefined ? undefined : eq(audit.entityKind, query.entityKind),
      query.entityId === undefined ? undefined : eq(audit.entityId, query.entityId),
    ))
    .orderBy(desc(audit.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, row => [row.id])
  return {
    items: page.rows.map(({ id, at, actorKind, actorName, action, entityKind, entityId, reason, before, after }) => ({ id, at: at.toISOString(), actorKind, actorName, action, entityKind, entityId, reason, before, after })),
    nextCursor: page.nextCursor,
  }
}
