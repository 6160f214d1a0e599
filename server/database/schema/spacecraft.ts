import { sql } from 'drizzle-orm'
import type { AnyPgColumn } from 'drizzle-orm/pg-core'
import { check, index, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { createdAt, id, instant, real } from './columns'
import { elementSets } from './elements'

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
  inUseSetId: uuid('in_use_set_id').references((): AnyPgColumn => elementSets.id, { onDelete: 'set null' }),
  retiredAt: instant('retired_at'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('spacecraft_name_unique').on(sql`lower(${t.name})`).where(sql`${t.retiredAt} IS NULL`),
  uniqueIndex('spacecraft_catalogue_number_unique').on(t.catalogueNumber).where(sql`${t.retiredAt} IS NULL`),
  index('spacecraft_in_use_set').on(t.inUseSetId),
  check('spacecraft_oscillator_range', sql`${t.oscillatorPpm} >= 0 AND ${t.oscillatorPpm} <= 1000`),
  check('spacecraft_age_limit_range', sql`${t.elementAgeLimitHours} > 0`),
])
