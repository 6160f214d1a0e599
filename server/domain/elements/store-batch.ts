import { sql } from 'drizzle-orm'
import type { Batch, JsonBytes } from '~~/server/workers/tasks/batch'
import { recordAudits } from '../audit'
import type { Deps } from '../context'

/** The driver sends a buffer as it is, which is how the database itself writes JSON. */
const jsonParameter = (json: JsonBytes): Buffer => Buffer.from(json.buffer, json.byteOffset, json.byteLength)

export interface Stored { accepted: number, alreadyHeld: number }

/** Why a set that nobody wanted is refused; such a one comes back when it turns out to be somebody's. */
export const droppedReason = 'dropped'

/**
 * Stores one batch of an upload inside the caller's transaction, by one statement: what is held already is left as it is
 * and noted as brought again. A held set that nobody claimed is given to the spacecraft that it matches by now.
 */
export async function storeBatch(deps: Deps, uploadId: string, batch: Batch): Promise<Stored> {
  const { db, now } = deps
  const { rows: [counts] } = batch.setCount === 0
    ? { rows: [] }
    : await db.execute<{ accepted: number, again: number }>(sql`
        WITH given AS MATERIALIZED (
          SELECT * FROM json_to_recordset(${jsonParameter(batch.sets)}::json) AS r("spacecraftId" uuid, name text, "catalogueNumber" text, designator text, epoch timestamptz,
            "epochUtcUs" bigint, elements jsonb, "originalText" text, line integer, sha256 text, "contentSha256" text, warnings jsonb, "matchWarning" jsonb)
        ), fresh AS (
          INSERT INTO element_sets (upload_id, spacecraft_id, name, catalogue_number, designator, epoch, epoch_utc_us, elements, original_text, line_number, sha256, content_sha256, warnings, created_at)
          SELECT ${uploadId}::uuid, "spacecraftId", name, "catalogueNumber", designator, epoch, "epochUtcUs", elements, "originalText", line, sha256, "contentSha256", warnings, ${now.toISOString()}::timestamptz
          FROM given ORDER BY "contentSha256"
          ON CONFLICT (content_sha256) DO NOTHING RETURNING content_sha256
        ), again AS (
          INSERT INTO element_upload_held (upload_id, line, element_set_id)
          SELECT ${uploadId}::uuid, given.line, held.id FROM given JOIN element_sets AS held ON held.content_sha256 = given."contentSha256"
          RETURNING line
        ), told AS (
          INSERT INTO element_upload_notes (upload_id, kind, line, name, code, message)
          SELECT ${uploadId}::uuid, 'warning', given.line, w.name, w.code, w.message
          FROM given JOIN fresh ON fresh.content_sha256 = given."contentSha256", jsonb_to_record(given."matchWarning") AS w(name text, code text, message text)
          WHERE given."matchWarning" IS NOT NULL
        )
        SELECT (SELECT count(*)::integer FROM fresh) AS accepted, (SELECT count(*)::integer FROM again) AS again`)
  if (batch.noteCount > 0) await storeNotes(deps, uploadId, batch.notes)
  const [accepted, alreadyHeld] = [counts?.accepted ?? 0, counts?.again ?? 0]
  if (alreadyHeld > 0 && batch.matchedCount > 0) await claimHeld(deps, batch.matched)
  return { accepted, alreadyHeld }
}

/** Stores lines of a report: JSON of `{ kind, line, name?, code, message }`. */
export async function storeNotes({ db }: Pick<Deps, 'db'>, uploadId: string, notes: JsonBytes): Promise<void> {
  await db.execute(sql`
    INSERT INTO element_upload_notes (upload_id, kind, line, name, code, message)
    SELECT ${uploadId}::uuid, kind, line, name, code, message FROM json_to_recordset(${jsonParameter(notes)}::json) AS r(kind text, line integer, name text, code text, message text)`)
}

async function claimHeld(deps: Deps, matched: JsonBytes): Promise<void> {
  const { rows } = await deps.db.execute<{ id: string, spacecraftId: string }>(sql`
    WITH wanted AS (
      SELECT held.id, r."spacecraftId" FROM json_to_recordset(${jsonParameter(matched)}::json) AS r("contentSha256" text, "spacecraftId" uuid)
      JOIN element_sets AS held ON held.content_sha256 = r."contentSha256"
      WHERE held.spacecraft_id IS NULL AND (held.state = 'waiting' OR (held.state = 'refused' AND held.reason = ${droppedReason}))
      ORDER BY held.id FOR UPDATE OF held
    )
    UPDATE element_sets AS held SET spacecraft_id = wanted."spacecraftId", state = 'waiting', kept_at = NULL, decided_at = NULL, decided_by = NULL, reason = NULL
    FROM wanted WHERE held.id = wanted.id RETURNING held.id, held.spacecraft_id AS "spacecraftId"`)
  await recordAudits(deps, rows.map(({ id, spacecraftId }) => ({ action: 'element-set.assign', entityKind: 'element-set', entityId: id, before: { spacecraftId: null }, after: { spacecraftId } })))
}
