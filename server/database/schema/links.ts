import { sql } from 'drizzle-orm'
import { boolean, check, index, integer, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { createdAt, id, instant, real } from './columns'
import { spacecraft } from './spacecraft'

export const links = pgTable('links', {
  id: id(),
  spacecraftId: uuid('spacecraft_id').notNull().references(() => spacecraft.id, { onDelete: 'cascade' }),
  name: text('name').notNull(),
  direction: text('direction', { enum: ['uplink', 'downlink'] }).notNull(),
  carrierHz: real('carrier_hz').notNull(),
  bandLowHz: real('band_low_hz').notNull(),
  bandHighHz: real('band_high_hz').notNull(),
  symbolRateHz: real('symbol_rate_hz').notNull(),
  modulation: text('modulation').notNull(),
  detector: text('detector', { enum: ['quadrature', 'coherent', 'msk', 'differential', 'fsk', 'multicarrier', 'chirp', 'stated'] }).notNull(),
  permittedLossDb: real('permitted_loss_db').notNull().default(0.5),
  captureRangeHz: real('capture_range_hz'),
  filterBandwidthHz: real('filter_bandwidth_hz'),
  rolloff: real('rolloff'),
  limitHz: real('limit_hz'),
  /** Occupied bandwidth and spreading factor of a chirp. */
  bandwidthHz: real('bandwidth_hz'),
  spreadingFactor: integer('spreading_factor'),
  /** Es/N0 that a multicarrier link works at. */
  esN0Db: real('es_n0_db').notNull().default(20),
  /** Of a downlink that the transponder makes from what it hears: downlink = numerator/denominator × uplink. Null where its own oscillator makes it. */
  turnaroundNumerator: integer('turnaround_numerator'),
  turnaroundDenominator: integer('turnaround_denominator'),
  uplinkPrecompensated: boolean('uplink_precompensated').notNull().default(true),
  driftLimitHzPerS: real('drift_limit_hz_per_s'),
  jumpLimitHz: real('jump_limit_hz'),
  errorRate: real('error_rate').notNull().default(1e-5),
  minElevationDeg: real('min_elevation_deg').notNull().default(0),
  /** A drafted table that holds is approved by itself. */
  approveWhatHolds: boolean('approve_what_holds').notNull(),
  retiredAt: instant('retired_at'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('links_name_unique').on(t.spacecraftId, sql`lower(${t.name})`).where(sql`${t.retiredAt} IS NULL`),
  index('links_spacecraft').on(t.spacecraftId),
  check('links_carrier_in_band', sql`${t.carrierHz} > 0 AND ${t.bandLowHz} > 0 AND ${t.bandLowHz} <= ${t.carrierHz} AND ${t.carrierHz} <= ${t.bandHighHz}`),
  check('links_symbol_rate_positive', sql`${t.symbolRateHz} > 0`),
  check('links_permitted_loss_range', sql`${t.permittedLossDb} > 0 AND ${t.permittedLossDb} <= 20`),
  check('links_stated_has_limit', sql`${t.detector} <> 'stated' OR ${t.limitHz} > 0`),
  check('links_chirp_has_shape', sql`${t.detector} <> 'chirp' OR (${t.bandwidthHz} > 0 AND ${t.spreadingFactor} BETWEEN 5 AND 12)`),
  check('links_turnaround_whole', sql`(${t.turnaroundNumerator} IS NULL AND ${t.turnaroundDenominator} IS NULL) OR (${t.direction} = 'downlink' AND ${t.turnaroundNumerator} BETWEEN 1 AND 100000 AND ${t.turnaroundDenominator} BETWEEN 1 AND 100000 AND ${t.turnaroundDenominator} IS NOT NULL AND ${t.turnaroundNumerator} IS NOT NULL)`),
  check('links_min_elevation_range', sql`${t.minElevationDeg} >= 0 AND ${t.minElevationDeg} < 90`),
])
