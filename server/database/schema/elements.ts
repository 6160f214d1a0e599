import { sql } from 'drizzle-orm'
import type { AnyPgColumn } from 'drizzle-orm/pg-core'
import { bigint, bigserial, check, customType, index, integer, jsonb, pgTable, primaryKey, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import type { MeanElements } from '../../../shared/physics/types'
import { createdAt, id, instant } from './columns'
import { people } from './people'
import { spacecraft } from './spacecraft'

const bytea = customType<{ data: Buffer }>({ dataType: () => 'bytea' })

export interface UploadNote { line: number, name?: string, code: string, message: string }

export const elementUploads = pgTable('element_uploads', {
  id: id(),
  state: text('state', { enum: ['receiving', 'reading', 'finished', 'cancelled', 'failed'] }).notNull(),
  /** How far reading and storing has come, of totalBytes. */
  readBytes: integer('read_bytes').notNull().default(0),
  cancelRequestedAt: instant('cancel_requested_at'),
  finishedAt: instant('finished_at'),
  by: text('by').notNull(),
  personId: uuid('person_id').references(() => people.id, { onDelete: 'set null' }),
  fileName: text('file_name'),
  source: text('source', { enum: ['file', 'paste', 'api', 'folder', 'demo'] }).notNull(),
  format: text('format'),
  /** Of what was sent; null until all of it is there. */
  sha256: text('sha256'),
  totalBytes: integer('total_bytes').notNull(),
  accepted: integer('accepted').notNull().default(0),
  alreadyHeld: integer('already_held').notNull().default(0),
  refused: integer('refused').notNull().default(0),
  detail: text('detail'),
  createdAt: createdAt(),
}, t => [
  index('element_uploads_person').on(t.personId),
  index('element_uploads_created').on(t.createdAt),
  index('element_uploads_open').on(t.createdAt).where(sql`${t.state} IN ('receiving','reading')`),
  index('element_uploads_sha256').on(t.sha256),
])

/** What was sent, byte for byte, in the order of its parts; kept for ever. */
export const elementUploadParts = pgTable('element_upload_parts', {
  uploadId: uuid('upload_id').notNull().references(() => elementUploads.id, { onDelete: 'cascade' }),
  number: integer('number').notNull(),
  bytes: bytea('bytes').notNull(),
}, t => [primaryKey({ columns: [t.uploadId, t.number] })])

/** The report of an upload, line by line. */
export const elementUploadNotes = pgTable('element_upload_notes', {
  id: bigserial('id', { mode: 'number' }).primaryKey(),
  uploadId: uuid('upload_id').notNull().references(() => elementUploads.id, { onDelete: 'cascade' }),
  kind: text('kind', { enum: ['refusal', 'warning'] }).notNull(),
  line: integer('line').notNull(),
  name: text('name'),
  code: text('code').notNull(),
  message: text('message').notNull(),
}, t => [index('element_upload_notes_upload').on(t.uploadId, t.kind, t.line, t.id)])

/** Sets that an upload brought again; a set itself belongs to the upload that brought it first. */
export const elementUploadHeld = pgTable('element_upload_held', {
  uploadId: uuid('upload_id').notNull().references(() => elementUploads.id, { onDelete: 'cascade' }),
  line: integer('line').notNull(),
  elementSetId: uuid('element_set_id').notNull().references(() => elementSets.id, { onDelete: 'cascade' }),
}, t => [primaryKey({ columns: [t.uploadId, t.line, t.elementSetId] }), index('element_upload_held_set').on(t.elementSetId)])

export const elementSets = pgTable('element_sets', {
  id: id(),
  uploadId: uuid('upload_id').notNull().references(() => elementUploads.id, { onDelete: 'restrict' }),
  /** Null: matches no spacecraft, kept until somebody makes or names one. */
  spacecraftId: uuid('spacecraft_id').references((): AnyPgColumn => spacecraft.id, { onDelete: 'restrict' }),
  state: text('state', { enum: ['waiting', 'in-use', 'past', 'refused'] }).notNull().default('waiting'),
  name: text('name'),
  catalogueNumber: text('catalogue_number'),
  designator: text('designator'),
  epoch: instant('epoch').notNull(),
  epochUtcUs: bigint('epoch_utc_us', { mode: 'number' }).notNull(),
  elements: jsonb('elements').$type<MeanElements>().notNull(),
  originalText: text('original_text').notNull(),
  lineNumber: integer('line_number').notNull(),
  /** SHA-256 of the original text. */
  sha256: text('sha256').notNull(),
  /** SHA-256 over the numbers that decide a prediction, whatever the notation. */
  contentSha256: text('content_sha256').notNull(),
  warnings: jsonb('warnings').$type<UploadNote[]>().notNull().default([]),
  /** A person has put it into use for this instant; it waits until then. */
  useAt: instant('use_at'),
  useScheduledById: uuid('use_scheduled_by_id').references(() => people.id, { onDelete: 'set null' }),
  useScheduledBy: text('use_scheduled_by'),
  /** Matches no spacecraft and is kept on purpose: off the list of what waits. */
  keptAt: instant('kept_at'),
  decidedAt: instant('decided_at'),
  decidedBy: text('decided_by'),
  reason: text('reason'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('element_sets_content_unique').on(t.contentSha256),
  uniqueIndex('element_sets_one_in_use').on(t.spacecraftId).where(sql`${t.state} = 'in-use'`),
  index('element_sets_spacecraft').on(t.spacecraftId, t.epoch),
  index('element_sets_upload').on(t.uploadId, t.lineNumber, t.id),
  index('element_sets_use_at').on(t.useAt).where(sql`${t.useAt} IS NOT NULL`),
  index('element_sets_use_scheduled_by').on(t.useScheduledById),
  index('element_sets_unassigned').on(t.state, t.epoch).where(sql`${t.spacecraftId} IS NULL`),
  index('element_sets_epoch').on(t.epoch),
  check('element_sets_use_at_waits', sql`${t.useAt} IS NULL OR (${t.state} IN ('waiting','past') AND ${t.spacecraftId} IS NOT NULL)`),
  check('element_sets_in_use_has_spacecraft', sql`${t.state} NOT IN ('in-use','past') OR ${t.spacecraftId} IS NOT NULL`),
])
