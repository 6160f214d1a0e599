import { sql } from 'drizzle-orm'
import { boolean, check, index, integer, jsonb, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { createdAt, id, instant, real } from './columns'
import { elementSets } from './elements'
import { links } from './links'
import { people } from './people'
import { spacecraft } from './spacecraft'
import { antennas, radios, stations } from './stations'

/** One spacecraft, one station, one culmination; keeps its id when elements change. */
export const passes = pgTable('passes', {
  id: id(),
  spacecraftId: uuid('spacecraft_id').notNull().references(() => spacecraft.id, { onDelete: 'cascade' }),
  stationId: uuid('station_id').notNull().references(() => stations.id, { onDelete: 'cascade' }),
  elementSetId: uuid('element_set_id').notNull().references(() => elementSets.id, { onDelete: 'restrict' }),
  aos: instant('aos').notNull(),
  culmination: instant('culmination').notNull(),
  los: instant('los').notNull(),
  maxElevationDeg: real('max_elevation_deg').notNull(),
  /** Counts what a calendar has to be told: it moved, or is gone. */
  calendarSequence: integer('calendar_sequence').notNull().default(0),
  /** No longer predicted. */
  goneAt: instant('gone_at'),
  createdAt: createdAt(),
}, t => [
  index('passes_spacecraft_station').on(t.spacecraftId, t.stationId, t.culmination),
  index('passes_station').on(t.stationId, t.aos),
  index('passes_element_set').on(t.elementSetId),
  index('passes_aos').on(t.aos),
  check('passes_order', sql`${t.aos} <= ${t.culmination} AND ${t.culmination} <= ${t.los}`),
])

/** One pass and one link. */
export const tables = pgTable('tables', {
  id: id(),
  passId: uuid('pass_id').notNull().references(() => passes.id, { onDelete: 'cascade' }),
  linkId: uuid('link_id').notNull().references(() => links.id, { onDelete: 'cascade' }),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('tables_pass_link_unique').on(t.passId, t.linkId),
  index('tables_link').on(t.linkId),
])

export interface StoredRetune {
  at: string
  frequencyHz: number
  slopeHzPerS: number
  dopplerHz: number
  rangeRateMps: number
  azimuthDeg: number
  elevationDeg: number
  residualMinHz: number
  residualMaxHz: number
  lossDb: number | null
}
export interface StoredCheck {
  allowanceHz: number
  limitedBy: string
  worstResidualHz: number
  worstAt: string
  margin: number
  budget: { stepsHz: number, timingHz: number, ut1Hz: number, orbitHz: number, oscillatorHz: number, trimHz: number }
  symbolClockPpm: { min: number, max: number }
  excess: { from: string, to: string }[]
  faults: { code: string, at: string, message: string }[]
  kappa: number
  /** Workable part for this link. */
  workable: { from: string, to: string }[]
}

export const tableStates = ['drafted', 'approved', 'held', 'published', 'collected', 'superseded', 'withdrawn', 'lapsed'] as const

export const tableRevisions = pgTable('table_revisions', {
  id: id(),
  tableId: uuid('table_id').notNull().references(() => tables.id, { onDelete: 'cascade' }),
  number: integer('number').notNull(),
  state: text('state', { enum: tableStates }).notNull(),
  verdict: text('verdict', { enum: ['holds', 'tight', 'breaks'] }).notNull(),
  radioId: uuid('radio_id').notNull().references(() => radios.id, { onDelete: 'restrict' }),
  elementSetId: uuid('element_set_id').notNull().references(() => elementSets.id, { onDelete: 'restrict' }),
  retunes: jsonb('retunes').$type<StoredRetune[]>().notNull(),
  check: jsonb('check').$type<StoredCheck>().notNull(),
  /** SHA-256 of all that went into the plan; equal means nothing to recompute. */
  inputsDigest: text('inputs_digest').notNull(),
  /** Its passes stand down for another that has the antenna. */
  standsDown: boolean('stands_down').notNull().default(false),
  /** Why it is in this state or was drafted anew, in words. */
  reason: text('reason'),
  approvedById: uuid('approved_by_id').references(() => people.id, { onDelete: 'set null' }),
  approvedBy: text('approved_by'),
  approvedAt: instant('approved_at'),
  /** A table that breaks needs a second person before it goes out. */
  secondedById: uuid('seconded_by_id').references(() => people.id, { onDelete: 'set null' }),
  secondedBy: text('seconded_by'),
  heldAt: instant('held_at'),
  publishedAt: instant('published_at'),
  publishedBy: text('published_by'),
  collectedAt: instant('collected_at'),
  supersededAt: instant('superseded_at'),
  withdrawnAt: instant('withdrawn_at'),
  lapsedAt: instant('lapsed_at'),
  /** Canonical JSON that was digested and signed; set once, at publication. */
  canonical: text('canonical'),
  digest: text('digest'),
  signature: text('signature'),
  updatedAt: instant('updated_at').notNull().default(sql`now()`),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('table_revisions_number_unique').on(t.tableId, t.number),
  uniqueIndex('table_revisions_one_open').on(t.tableId).where(sql`${t.state} IN ('drafted','approved','held')`),
  uniqueIndex('table_revisions_one_out').on(t.tableId).where(sql`${t.state} IN ('published','collected')`),
  index('table_revisions_radio').on(t.radioId),
  index('table_revisions_element_set').on(t.elementSetId),
  index('table_revisions_approved_by').on(t.approvedById),
  index('table_revisions_seconded_by').on(t.secondedById),
  index('table_revisions_state').on(t.state),
  check('table_revisions_number_positive', sql`${t.number} >= 1`),
  check('table_revisions_published_whole', sql`${t.state} NOT IN ('published','collected','superseded','withdrawn') OR (${t.publishedAt} IS NOT NULL AND ${t.canonical} IS NOT NULL AND ${t.digest} IS NOT NULL AND ${t.signature} IS NOT NULL)`),
])

/** A person gave an antenna to one of two passes that want it at one time. */
export const antennaDecisions = pgTable('antenna_decisions', {
  id: id(),
  antennaId: uuid('antenna_id').notNull().references(() => antennas.id, { onDelete: 'cascade' }),
  /** Has the antenna. */
  passId: uuid('pass_id').notNull().references(() => passes.id, { onDelete: 'cascade' }),
  /** Stands down. */
  otherPassId: uuid('other_pass_id').notNull().references(() => passes.id, { onDelete: 'cascade' }),
  decidedBy: text('decided_by').notNull(),
  decidedAt: instant('decided_at').notNull(),
  reason: text('reason'),
}, t => [
  uniqueIndex('antenna_decisions_pair_unique').on(t.antennaId, sql`least(${t.passId}, ${t.otherPassId})`, sql`greatest(${t.passId}, ${t.otherPassId})`),
  index('antenna_decisions_pass').on(t.passId),
  index('antenna_decisions_other_pass').on(t.otherPassId),
  check('antenna_decisions_two_passes', sql`${t.passId} <> ${t.otherPassId}`),
])

export const stationReports = pgTable('station_reports', {
  id: id(),
  revisionId: uuid('revision_id').notNull().references(() => tableRevisions.id, { onDelete: 'cascade' }),
  outcome: text('outcome', { enum: ['loaded', 'refused'] }).notNull(),
  reason: text('reason'),
  at: instant('at').notNull(),
}, t => [index('station_reports_revision').on(t.revisionId)])

export const signingKeys = pgTable('signing_keys', {
  kid: text('kid').primaryKey(),
  publicJwk: jsonb('public_jwk').$type<Record<string, string>>().notNull(),
  privateJwk: jsonb('private_jwk').$type<Record<string, string>>().notNull(),
  active: boolean('active').notNull().default(true),
  /** Signs no more; what it signed still verifies. */
  retiredAt: instant('retired_at'),
  createdAt: createdAt(),
}, t => [uniqueIndex('signing_keys_one_active').on(t.active).where(sql`${t.active}`)])
