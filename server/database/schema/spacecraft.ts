import { sql } from 'drizzle-orm'
import type { AnyPgColumn } from 'drizzle-orm/pg-core'
import { check, index, integer, jsonb, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { createdAt, id, instant, real } from './columns'
import { elementSets } from './elements'

/** When a waiting set may go into use without a person: within all of these limits, and with no warning. */
export interface AutoUseRule {
  /** Largest shift of any coming pass, seconds. */
  maxShiftS: number
  /** Largest change of Doppler on any link, as a share of its allowance. */
  maxAllowanceShare: number
  /** Largest difference along the track over what the learned accuracy leads to expect. */
  maxSigmas: number
}

export const spacecraft = pgTable('spacecraft', {
  id: id(),
  name: text('name').notNull(),
  catalogueNumber: text('catalogue_number'),
  designator: text('designator'),
  /** Data-sheet limit of the on-board reference, parts per million. */
  oscillatorPpm: real('oscillator_ppm').notNull().default(0),
  elementAgeLimitHours: real('element_age_limit_hours').notNull().default(72),
  /** One sigma along track at the epoch and its growth; null takes the prior by perigee. */
  alongTrackFloorKm: real('along_track_floor_km'),
  alongTrackGrowthKmPerDay: real('along_track_growth_km_per_day'),
  /** Of two passes that want one antenna, the higher has it unless somebody decides otherwise. */
  priority: integer('priority').notNull().default(0),
  /** Null: a person decides on every set. */
  autoUse: jsonb('auto_use').$type<AutoUseRule>(),
  inUseSetId: uuid('in_use_set_id').references((): AnyPgColumn => elementSets.id, { onDelete: 'set null' }),
  retiredAt: instant('retired_at'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('spacecraft_name_unique').on(sql`lower(${t.name})`).where(sql`${t.retiredAt} IS NULL`),
  uniqueIndex('spacecraft_catalogue_number_unique').on(t.catalogueNumber).where(sql`${t.retiredAt} IS NULL`),
  index('spacecraft_in_use_set').on(t.inUseSetId),
  check('spacecraft_oscillator_range', sql`${t.oscillatorPpm} >= 0 AND ${t.oscillatorPpm} <= 1000`),
  check('spacecraft_priority_range', sql`${t.priority} BETWEEN 0 AND 100`),
  check('spacecraft_age_limit_range', sql`${t.elementAgeLimitHours} > 0`),
])

/** Entered by hand; while no set from after its end is in use, it widens the along-track spread. Sets from inside it teach nothing about ageing. */
export const manoeuvres = pgTable('manoeuvres', {
  id: id(),
  spacecraftId: uuid('spacecraft_id').notNull().references(() => spacecraft.id, { onDelete: 'cascade' }),
  startsAt: instant('starts_at').notNull(),
  endsAt: instant('ends_at').notNull(),
  /** One sigma of the change of speed along the track that is not known beforehand, m/s. */
  speedSigmaMps: real('speed_sigma_mps').notNull(),
  note: text('note'),
  enteredBy: text('entered_by').notNull(),
  cancelledAt: instant('cancelled_at'),
  cancelledBy: text('cancelled_by'),
  createdAt: createdAt(),
}, t => [
  index('manoeuvres_spacecraft').on(t.spacecraftId, t.startsAt),
  check('manoeuvres_order', sql`${t.startsAt} <= ${t.endsAt}`),
  check('manoeuvres_speed_range', sql`${t.speedSigmaMps} >= 0 AND ${t.speedSigmaMps} <= 5000`),
])
