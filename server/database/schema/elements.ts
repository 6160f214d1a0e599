import { sql } from 'drizzle-orm'
import type { AnyPgColumn } from 'drizzle-orm/pg-core'
import { bigint, check, customType, index, integer, jsonb, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import type { MeanElements } from '../../../shared/physics/types'
import { createdAt, id, instant } from './columns'
import { people } from './people'
import { spacecraft } from './spacecraft'

const bytea = customType<{ data: Buffer }>({ dataType: () => 'bytea' })

export interface UploadNote { line: number, name?: string, code: string, message: string }

export const elementUploads = pgTable('element_uploads', {
  id: id(),
  state: text('state', { enum: ['receiving', 'reading', 'finished', 'cancelled', 'failed'] }).notNull(),
  by: text('by').notNull(),
  personId: uuid('person_id').references(() => people.id, { onDelete: 'set null' }),
  fileName: text('file_name'),
  source: text('source', { enum: ['file', 'paste', 'api', 'demo'] }).notNull(),
  format: text('format'),
  /** What was sent, byte for byte, kept for ever. */
  original: bytea('original').notNull(),
  sha256: text('sha256').notNull(),
  totalBytes: integer('total_bytes').notNull(),
  accepted: integer('accepted').notNull().default(0),
  alreadyHeld: integer('already_held').notNull().default(0),
  refused: integer('refused').notNull().default(0),
  refusals: jsonb('refusals').$type<UploadNote[]>().notNull().default([]),
  warnings: jsonb('warnings').$type<UploadNote[]>().notNull().default([]),
  detail: text('detail'),
  createdAt: createdAt(),
}, t => [index('element_uploads_person').on(t.personId), index('element_uploads_created').on(t.createdAt)])

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
  decidedAt: instant('decided_at'),
  decidedBy: text('decided_by'),
  reason: text('reason'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('element_sets_content_unique').on(t.contentSha256),
  uniqueIndex('element_sets_one_in_use').on(t.spacecraftId).where(sql`${t.state} = 'in-use'`),
  index('element_sets_spacecraft').on(t.spacecraftId, t.epoch),
  index('element_sets_upload').on(t.uploadId),
  index('element_sets_epoch').on(t.epoch),
  check('element_sets_in_use_has_spacecraft', sql`${t.state} NOT IN ('in-use','past') OR ${t.spacecraftId} IS NOT NULL`),
])
