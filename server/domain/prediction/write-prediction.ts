import { sql } from 'drizzle-orm'
import { passes, tableRevisions, tables } from '~~/server/database/schema'
import { recordAudits } from '../audit'
import type { Deps } from '../context'
import type { Merge } from './merge-prediction'

/** Rows of a statement; and retunes of a statement, some 250 bytes each, so that it stays far within its time limit. */
const CHUNK = 50
const MOST_RETUNES = 10_000

/**
 * Writes a prediction in a few statements; inside the caller's transaction. A pass counts what a calendar has to be told (RFC 5546,
 * section 2.1.4): AOS or LOS moved by a second as calendars write them, it went, or it came back.
 */
export async function writePrediction(deps: Deps, merge: Merge): Promise<void> {
  const { db, now } = deps
  for (const rows of chunks(merge.passInserts)) await db.insert(passes).values(rows)
  for (const rows of chunks(merge.passChanges)) {
    await db.execute(sql`
      UPDATE passes SET element_set_id = new.element_set_id, aos = new.aos, culmination = new.culmination, los = new.los, max_elevation_deg = new.max_elevation_deg, gone_at = NULL,
        calendar_sequence = passes.calendar_sequence + CASE WHEN passes.gone_at IS NOT NULL OR date_trunc('second', passes.aos) <> date_trunc('second', new.aos) OR date_trunc('second', passes.los) <> date_trunc('second', new.los) THEN 1 ELSE 0 END
      FROM jsonb_to_recordset(${JSON.stringify(rows.map(row => ({ ...row, element_set_id: row.elementSetId, max_elevation_deg: row.maxElevationDeg })))}::jsonb)
        AS new(id uuid, element_set_id uuid, aos timestamptz, culmination timestamptz, los timestamptz, max_elevation_deg double precision)
      WHERE passes.id = new.id`)
  }
  for (const ids of chunks(merge.gonePassIds)) {
    await db.execute(sql`UPDATE passes SET gone_at = ${now.toISOString()}, calendar_sequence = calendar_sequence + 1 WHERE id IN (SELECT value::uuid FROM jsonb_array_elements_text(${JSON.stringify(ids)}::jsonb))`)
  }
  for (const rows of chunks(merge.tableInserts)) await db.insert(tables).values(rows)
  for (const rows of chunks(merge.lapses)) {
    await db.execute(sql`
      UPDATE table_revisions SET state = 'lapsed', reason = new.reason, lapsed_at = ${now.toISOString()}, updated_at = ${now.toISOString()}
      FROM jsonb_to_recordset(${JSON.stringify(rows)}::jsonb) AS new(id uuid, reason text) WHERE table_revisions.id = new.id`)
  }
  for (const rows of chunks(merge.revisionInserts, row => row.retunes.length)) await db.insert(tableRevisions).values(rows)
  for (const rows of chunks(merge.revisionChanges, row => row.rows?.retunes.length ?? 0)) await changeRevisions(deps, rows)
  await recordAudits(deps, merge.audits)
}

async function changeRevisions({ db, now }: Deps, changes: Merge['revisionChanges']): Promise<void> {
  const rows = changes.map(({ id, state, reason, approvedById, approvedBy, approvedAt, secondedById, secondedBy, rows }) => ({
    id, state, reason, approved_by_id: approvedById, approved_by: approvedBy, approved_at: approvedAt, seconded_by_id: secondedById, seconded_by: secondedBy,
    verdict: rows?.verdict, radio_id: rows?.radioId, element_set_id: rows?.elementSetId, inputs_digest: rows?.inputsDigest, retunes: rows?.retunes, check: rows?.check,
  }))
  await db.execute(sql`
    UPDATE table_revisions AS old SET
      state = new.state, reason = new.reason, updated_at = ${now.toISOString()},
      approved_by_id = new.approved_by_id, approved_by = new.approved_by, approved_at = new.approved_at,
      seconded_by_id = new.seconded_by_id, seconded_by = new.seconded_by,
      verdict = coalesce(new.verdict, old.verdict), radio_id = coalesce(new.radio_id, old.radio_id),
      element_set_id = coalesce(new.element_set_id, old.element_set_id), inputs_digest = coalesce(new.inputs_digest, old.inputs_digest),
      retunes = coalesce(new.retunes, old.retunes), "check" = coalesce(new."check", old."check")
    FROM jsonb_to_recordset(${JSON.stringify(rows)}::jsonb)
      AS new(id uuid, state text, reason text, approved_by_id uuid, approved_by text, approved_at timestamptz, seconded_by_id uuid, seconded_by text,
        verdict text, radio_id uuid, element_set_id uuid, inputs_digest text, retunes jsonb, "check" jsonb)
    WHERE old.id = new.id`)
}

function* chunks<T>(rows: readonly T[], retunesOf: (row: T) => number = () => 0): Generator<T[]> {
  let chunk: T[] = []
  let retunes = 0
  for (const row of rows) {
    if (chunk.length === CHUNK || (chunk.length > 0 && retunes + retunesOf(row) > MOST_RETUNES)) {
      yield chunk
      chunk = []
      retunes = 0
    }
    chunk.push(row)
    retunes += retunesOf(row)
  }
  if (chunk.length > 0) yield chunk
}
