import { sql } from 'drizzle-orm'
import { check, index, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { createdAt, id, instant } from './columns'
import { stations } from './stations'

export const people = pgTable('people', {
  id: id(),
  /** Lower case, trimmed. */
  email: text('email').notNull(),
  name: text('name').notNull(),
  /** Null until an invitation is taken up. */
  passwordHash: text('password_hash'),
  roles: text('roles').array().notNull(),
  /** IANA name; nights and local times are shown in it. */
  zone: text('zone').notNull().default('UTC'),
  disabledAt: instant('disabled_at'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('people_email_unique').on(t.email),
  check('people_email_lower', sql`${t.email} = lower(${t.email}) AND position('@' in ${t.email}) > 1`),
  check('people_roles_known', sql`${t.roles} <@ ARRAY['flight-dynamics','operator','on-call','administrator','reader']::text[] AND cardinality(${t.roles}) >= 1`),
])

export const sessions = pgTable('sessions', {
  /** SHA-256 of the random id that the cookie carries. */
  idHash: text('id_hash').primaryKey(),
  personId: uuid('person_id').notNull().references(() => people.id, { onDelete: 'cascade' }),
  createdAt: createdAt(),
  lastSeenAt: instant('last_seen_at').notNull().default(sql`now()`),
  expiresAt: instant('expires_at').notNull(),
  endedAt: instant('ended_at'),
}, t => [index('sessions_person').on(t.personId)])

/** First administrator, invitation: one address, used once, before its end. */
export const oneTimeLinks = pgTable('one_time_links', {
  tokenHash: text('token_hash').primaryKey(),
  kind: text('kind', { enum: ['first-administrator', 'invitation'] }).notNull(),
  personId: uuid('person_id').references(() => people.id, { onDelete: 'cascade' }),
  createdAt: createdAt(),
  expiresAt: instant('expires_at').notNull(),
  usedAt: instant('used_at'),
}, t => [
  index('one_time_links_person').on(t.personId),
  check('one_time_links_person_given', sql`(${t.kind} = 'first-administrator') = (${t.personId} IS NULL)`),
])

export const apiKeys = pgTable('api_keys', {
  id: id(),
  name: text('name').notNull(),
  /** First characters, shown in lists and used for the look-up. */
  prefix: text('prefix').notNull(),
  keyHash: text('key_hash').notNull(),
  scope: text('scope', { enum: ['station', 'elements:write', 'read', 'metrics'] }).notNull(),
  stationId: uuid('station_id').references(() => stations.id, { onDelete: 'cascade' }),
  createdById: uuid('created_by_id').references(() => people.id, { onDelete: 'set null' }),
  createdAt: createdAt(),
  lastUsedAt: instant('last_used_at'),
  revokedAt: instant('revoked_at'),
}, t => [
  uniqueIndex('api_keys_prefix_unique').on(t.prefix),
  index('api_keys_station').on(t.stationId),
  index('api_keys_created_by').on(t.createdById),
  check('api_keys_station_bound', sql`(${t.scope} = 'station') = (${t.stationId} IS NOT NULL)`),
])
