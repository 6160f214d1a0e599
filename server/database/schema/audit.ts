import { bigserial, index, jsonb, pgTable, text, uuid } from 'drizzle-orm/pg-core'
import { instant } from './columns'

/** Who, when, what before, what after. A trigger in the migrations refuses UPDATE, DELETE and TRUNCATE. */
export const audit = pgTable('audit', {
  id: bigserial('id', { mode: 'number' }).primaryKey(),
  at: instant('at').notNull(),
  actorKind: text('actor_kind', { enum: ['person', 'key', 'schedule', 'system'] }).notNull(),
  actorId: text('actor_id'),
  actorName: text('actor_name').notNull(),
  /** noun.verb, such as table.publish */
  action: text('action').notNull(),
  entityKind: text('entity_kind').notNull(),
  entityId: text('entity_id').notNull(),
  /** Groups what belongs together for a reader, such as all revisions of one table. */
  tableId: uuid('table_id'),
  reason: text('reason'),
  before: jsonb('before'),
  after: jsonb('after'),
}, t => [
  index('audit_entity').on(t.entityKind, t.entityId),
  index('audit_table').on(t.tableId),
  index('audit_at').on(t.at),
])
