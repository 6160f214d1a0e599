import type { SQL } from 'drizzle-orm'
import { sql } from 'drizzle-orm'
import type { CsvValue } from '#shared/formats/csv-field'
import { csvRow } from '#shared/formats/csv-field'
import type { Deps } from '../context'
import { findUpload } from './show-uploads'

const rowsAtOnce = 5000

interface ReportLine extends Record<string, unknown> { line: number, source: number, id: string, outcome: string, name: string | null, number: string | null, epoch: Date | null, spacecraft: string | null, code: string | null, message: string | null }
type Place = Pick<ReportLine, 'line' | 'source' | 'id'>

/**
 * The whole report of an upload as CSV, by line: what became of each set, and every remark. Handed out piece by piece, so
 * that a report of 200,000 lines is never held whole.
 * @throws not-found before the first piece
 */
export async function uploadReportCsv({ db }: Pick<Deps, 'db'>, uploadId: string): Promise<AsyncGenerator<string>> {
  await findUpload(db, uploadId)
  return pieces({ db }, uploadId)
}

async function* pieces({ db }: Pick<Deps, 'db'>, uploadId: string): AsyncGenerator<string> {
  yield csvRow(['line', 'outcome', 'name', 'catalogueNumber', 'epoch', 'spacecraft', 'code', 'message'])
  for (let after: Place | null = null; ;) {
    const rows: ReportLine[] = (await db.execute<ReportLine>(pageAfter(uploadId, after))).rows
    if (rows.length === 0) return
    yield rows.map(row => csvRow(fieldsOf(row))).join('')
    after = rows.at(-1)!
  }
}

/** Each source by its own index and cut before they are put together, or every page would sort the whole report. */
function pageAfter(uploadId: string, after: Place | null): SQL {
  const beyond = (source: number, line: SQL, id: SQL, type: SQL) => {
    if (!after || source > after.source) return sql`${line} >= ${after?.line ?? 0}`
    return source < after.source ? sql`${line} > ${after.line}` : sql`(${line}, ${id}) > (${after.line}, ${after.id}::${type})`
  }
  const [uuid, bigint] = [sql`uuid`, sql`bigint`]
  return sql`
    SELECT * FROM (
      (SELECT brought.line_number AS line, 0 AS source, brought.id::text, 'accepted' AS outcome, brought.name, brought.catalogue_number AS number, brought.epoch, craft.name AS spacecraft, NULL AS code, NULL AS message
       FROM element_sets AS brought LEFT JOIN spacecraft AS craft ON craft.id = brought.spacecraft_id
       WHERE brought.upload_id = ${uploadId}::uuid AND ${beyond(0, sql`brought.line_number`, sql`brought.id`, uuid)} ORDER BY brought.line_number, brought.id LIMIT ${rowsAtOnce})
      UNION ALL
      (SELECT again.line, 1, held.id::text, 'already held', held.name, held.catalogue_number, held.epoch, craft.name, NULL, NULL
       FROM element_upload_held AS again JOIN element_sets AS held ON held.id = again.element_set_id LEFT JOIN spacecraft AS craft ON craft.id = held.spacecraft_id
       WHERE again.upload_id = ${uploadId}::uuid AND ${beyond(1, sql`again.line`, sql`again.element_set_id`, uuid)} ORDER BY again.line, again.element_set_id LIMIT ${rowsAtOnce})
      UNION ALL
      (SELECT note.line, 2, note.id::text, 'refused', note.name, NULL, NULL, NULL, note.code, note.message
       FROM element_upload_notes AS note WHERE note.upload_id = ${uploadId}::uuid AND note.kind = 'refusal' AND ${beyond(2, sql`note.line`, sql`note.id`, bigint)} ORDER BY note.line, note.id LIMIT ${rowsAtOnce})
      UNION ALL
      (SELECT note.line, 3, note.id::text, 'warning', note.name, NULL, NULL, NULL, note.code, note.message
       FROM element_upload_notes AS note WHERE note.upload_id = ${uploadId}::uuid AND note.kind = 'warning' AND ${beyond(3, sql`note.line`, sql`note.id`, bigint)} ORDER BY note.line, note.id LIMIT ${rowsAtOnce})
    ) AS report
    ORDER BY line, source, CASE WHEN source > 1 THEN id::bigint END, CASE WHEN source < 2 THEN id::uuid END LIMIT ${rowsAtOnce}`
}

const fieldsOf = ({ line, outcome, name, number, epoch, spacecraft, code, message }: ReportLine): CsvValue[] =>
  [line, outcome, name, number, epoch === null ? null : new Date(epoch).toISOString(), spacecraft, code, message]
