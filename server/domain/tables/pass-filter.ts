import type { SQL } from 'drizzle-orm'
import { and, eq, gte, lt, sql } from 'drizzle-orm'
import { z } from 'zod'
import { passes } from '~~/server/database/schema'
import { cursorInstant } from '../cursor'

export interface PassFilter { from?: string, to?: string, stationId?: string, spacecraftId?: string }

/** AOS and id of a page's last row. */
export const passKey = z.tuple([cursorInstant, z.uuid()])

/** Passes that end at or after `from` and rise before `to`. Those no longer predicted only while a station has a table of theirs. */
export function passConditions({ from, to, stationId, spacecraftId }: PassFilter): SQL | undefined {
  return and(
    from === undefined ? undefined : gte(passes.los, new Date(from)),
    to === undefined ? undefined : lt(passes.aos, new Date(to)),
    stationId === undefined ? undefined : eq(passes.stationId, stationId),
    spacecraftId === undefined ? undefined : eq(passes.spacecraftId, spacecraftId),
    sql`(${passes.goneAt} IS NULL OR EXISTS (
      SELECT 1 FROM tables AS own JOIN table_revisions AS given ON given.table_id = own.id
      WHERE own.pass_id = ${passes.id} AND given.state IN ('published','collected')))`,
  )
}
