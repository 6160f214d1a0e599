import { sql } from 'drizzle-orm'
import { boolean, check, index, integer, jsonb, pgTable, primaryKey, text, timestamp, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { createdAt, id, instant } from './columns'
import { people } from './people'
import { spacecraft } from './spacecraft'
import { stations } from './stations'
import { tables } from './tables'

/** One row for each thing the schedule has to do at an instant; its key makes it happen once. */
export const slots = pgTable('slots', {
  kind: text('kind', { enum: ['publish-night', 'publish-lead', 'digest', 'roll-forward'] }).notNull(),
  entity: text('entity').notNull(),
  instant: instant('instant').notNull(),
  doneAt: instant('done_at').notNull(),
  /** How late it ran, and what it did, in words. */
  outcome: text('outcome').notNull(),
}, t => [primaryKey({ columns: [t.kind, t.entity, t.instant] }), index('slots_done').on(t.doneAt)])

export const alerts = pgTable('alerts', {
  id: id(),
  kind: text('kind', { enum: ['residual-ahead', 'published-table-breaks', 'not-collected', 'elements-old', 'publication-failed', 'decision-due', 'station-refused', 'antenna-conflict', 'upload-refused', 'auto-use-declined', 'slots-missed', 'server-silent', 'web-hook-failing'] }).notNull(),
  /** One open alert per cause. */
  cause: text('cause').notNull(),
  severity: text('severity', { enum: ['call', 'notice'] }).notNull(),
  state: text('state', { enum: ['open', 'acknowledged', 'closed'] }).notNull().default('open'),
  title: text('title').notNull(),
  /** What, how bad, what to do. */
  detail: text('detail').notNull(),
  action: text('action').notNull(),
  spacecraftId: uuid('spacecraft_id').references(() => spacecraft.id, { onDelete: 'cascade' }),
  stationId: uuid('station_id').references(() => stations.id, { onDelete: 'cascade' }),
  tableId: uuid('table_id').references(() => tables.id, { onDelete: 'cascade' }),
  /** The instant it is about, such as the first AOS concerned. */
  dueAt: instant('due_at'),
  /** How many passes or tables share the cause now. */
  count: integer('count').notNull().default(1),
  openedAt: instant('opened_at').notNull(),
  acknowledgedAt: instant('acknowledged_at'),
  acknowledgedById: uuid('acknowledged_by_id').references(() => people.id, { onDelete: 'set null' }),
  acknowledgedBy: text('acknowledged_by'),
  closedAt: instant('closed_at'),
  closedBy: text('closed_by'),
  closeReason: text('close_reason'),
}, t => [
  uniqueIndex('alerts_one_per_cause').on(t.cause).where(sql`${t.state} <> 'closed'`),
  index('alerts_state').on(t.state, t.openedAt),
  index('alerts_spacecraft').on(t.spacecraftId),
  index('alerts_station').on(t.stationId),
  index('alerts_table').on(t.tableId),
  index('alerts_acknowledged_by').on(t.acknowledgedById),
])

export const mails = pgTable('mails', {
  id: id(),
  kind: text('kind', { enum: ['alert', 'digest', 'invitation'] }).notNull(),
  toName: text('to_name').notNull(),
  toAddress: text('to_address').notNull(),
  subject: text('subject').notNull(),
  text: text('text').notNull(),
  html: text('html').notNull(),
  /** Fixed before the first try, so that a repeated try is recognised as the same message. */
  messageId: text('message_id').notNull(),
  state: text('state', { enum: ['queued', 'sent', 'failed'] }).notNull().default('queued'),
  attempts: integer('attempts').notNull().default(0),
  lastError: text('last_error'),
  alertId: uuid('alert_id').references(() => alerts.id, { onDelete: 'cascade' }),
  createdAt: createdAt(),
  sentAt: instant('sent_at'),
}, t => [
  uniqueIndex('mails_message_id_unique').on(t.messageId),
  index('mails_alert').on(t.alertId),
  index('mails_state').on(t.state, t.createdAt),
])

/** What the local SMTP server of the demo and of the tests received. */
export const receivedMails = pgTable('received_mails', {
  id: id(),
  messageId: text('message_id').notNull(),
  fromAddress: text('from_address').notNull(),
  toAddresses: text('to_addresses').array().notNull(),
  subject: text('subject').notNull(),
  text: text('text').notNull(),
  html: text('html'),
  receivedAt: instant('received_at').notNull().default(sql`now()`),
}, t => [index('received_mails_at').on(t.receivedAt)])

export const settings = pgTable('settings', {
  key: text('key').primaryKey(),
  value: jsonb('value').notNull(),
  updatedAt: instant('updated_at').notNull().default(sql`now()`),
})

export const idempotencyKeys = pgTable('idempotency_keys', {
  actor: text('actor').notNull(),
  key: text('key').notNull(),
  route: text('route').notNull(),
  bodySha256: text('body_sha256').notNull(),
  status: integer('status'),
  answer: jsonb('answer'),
  createdAt: createdAt(),
}, t => [primaryKey({ columns: [t.actor, t.key] }), index('idempotency_keys_created').on(t.createdAt), check('idempotency_keys_key_length', sql`length(${t.key}) BETWEEN 1 AND 200`)])

/** For the rate limiter. */
export const rateLimits = pgTable('rate_limits', {
  key: text('key').primaryKey(),
  points: integer('points').notNull().default(0),
  expire: timestamp('expire', { withTimezone: true }),
})

/** A calendar that a program fetches by an address nobody can guess: of a person (all stations) or of one station. */
export const calendarAddresses = pgTable('calendar_addresses', {
  id: id(),
  /** SHA-256 of the secret part. */
  tokenHash: text('token_hash').notNull(),
  personId: uuid('person_id').references(() => people.id, { onDelete: 'cascade' }),
  stationId: uuid('station_id').references(() => stations.id, { onDelete: 'cascade' }),
  createdBy: text('created_by').notNull(),
  createdAt: createdAt(),
  lastUsedAt: instant('last_used_at'),
  revokedAt: instant('revoked_at'),
}, t => [
  uniqueIndex('calendar_addresses_token_unique').on(t.tokenHash),
  index('calendar_addresses_person').on(t.personId),
  index('calendar_addresses_station').on(t.stationId),
  check('calendar_addresses_whose', sql`num_nonnulls(${t.personId}, ${t.stationId}) = 1`),
])

/** Where somebody wants to be told by HTTP. */
export const webHooks = pgTable('web_hooks', {
  id: id(),
  name: text('name').notNull(),
  url: text('url').notNull(),
  /** Deliveries are signed with it, so it is kept as it is; shown once. */
  secret: text('secret').notNull(),
  events: text('events').array().notNull(),
  enabled: boolean('enabled').notNull().default(true),
  createdBy: text('created_by').notNull(),
  createdAt: createdAt(),
  retiredAt: instant('retired_at'),
}, t => [
  uniqueIndex('web_hooks_name_unique').on(sql`lower(${t.name})`).where(sql`${t.retiredAt} IS NULL`),
  check('web_hooks_events_known', sql`${t.events} <@ ARRAY['table.published','table.superseded','table.withdrawn','alert.opened','alert.closed']::text[] AND cardinality(${t.events}) >= 1`),
])

export const webHookDeliveries = pgTable('web_hook_deliveries', {
  /** The message's id, the same at every try. */
  id: id(),
  hookId: uuid('hook_id').notNull().references(() => webHooks.id, { onDelete: 'cascade' }),
  event: text('event').notNull(),
  /** The body, byte for byte. */
  body: text('body').notNull(),
  state: text('state', { enum: ['queued', 'delivered', 'failed'] }).notNull().default('queued'),
  attempts: integer('attempts').notNull().default(0),
  lastStatus: integer('last_status'),
  lastError: text('last_error'),
  createdAt: createdAt(),
  triedAt: instant('tried_at'),
}, t => [index('web_hook_deliveries_hook').on(t.hookId, t.createdAt), index('web_hook_deliveries_state').on(t.state, t.createdAt)])

/** Every running server says here that it lives. */
export const servers = pgTable('servers', {
  id: id(),
  host: text('host').notNull(),
  pid: integer('pid').notNull(),
  role: text('role', { enum: ['server', 'worker'] }).notNull(),
  startedAt: instant('started_at').notNull(),
  seenAt: instant('seen_at').notNull(),
  /** Ended on purpose. */
  stoppedAt: instant('stopped_at'),
}, t => [index('servers_seen').on(t.seenAt)])
