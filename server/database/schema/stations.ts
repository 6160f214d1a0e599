import { sql } from 'drizzle-orm'
import { boolean, check, index, integer, jsonb, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core'
import { createdAt, id, instant, real } from './columns'
import { links } from './links'
import { spacecraft } from './spacecraft'

export const stations = pgTable('stations', {
  id: id(),
  name: text('name').notNull(),
  latitudeDeg: real('latitude_deg').notNull(),
  longitudeDeg: real('longitude_deg').notNull(),
  /** WGS-84 ellipsoidal height of the antenna's phase centre. */
  heightM: real('height_m').notNull(),
  minElevationDeg: real('min_elevation_deg').notNull().default(5),
  mask: jsonb('mask').$type<{ azimuthDeg: number, elevationDeg: number }[]>().notNull().default([]),
  zone: text('zone').notNull(),
  /** Local time of the evening's publication, HH:MM. */
  publishAt: text('publish_at').notNull().default('18:00'),
  publishLeadMinutes: integer('publish_lead_minutes').notNull().default(60),
  freezeMinutes: integer('freeze_minutes').notNull().default(10),
  clockErrorMs: real('clock_error_ms').notNull().default(0),
  retiredAt: instant('retired_at'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('stations_name_unique').on(sql`lower(${t.name})`).where(sql`${t.retiredAt} IS NULL`),
  check('stations_position_range', sql`${t.latitudeDeg} BETWEEN -90 AND 90 AND ${t.longitudeDeg} BETWEEN -180 AND 180 AND ${t.heightM} BETWEEN -500 AND 9000`),
  check('stations_min_elevation_range', sql`${t.minElevationDeg} >= 0 AND ${t.minElevationDeg} < 90`),
  check('stations_publish_at_form', sql`${t.publishAt} ~ '^([01][0-9]|2[0-3]):[0-5][0-9]$'`),
  check('stations_lead_range', sql`${t.publishLeadMinutes} BETWEEN 1 AND 1440 AND ${t.freezeMinutes} BETWEEN 0 AND 1440`),
])

export const antennas = pgTable('antennas', {
  id: id(),
  stationId: uuid('station_id').notNull().references(() => stations.id, { onDelete: 'cascade' }),
  name: text('name').notNull(),
  setupS: real('setup_s').notNull().default(120),
  retiredAt: instant('retired_at'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('antennas_name_unique').on(t.stationId, sql`lower(${t.name})`).where(sql`${t.retiredAt} IS NULL`),
  index('antennas_station').on(t.stationId),
  check('antennas_setup_range', sql`${t.setupS} BETWEEN 0 AND 86400`),
])

export const radios = pgTable('radios', {
  id: id(),
  antennaId: uuid('antenna_id').notNull().references(() => antennas.id, { onDelete: 'cascade' }),
  name: text('name').notNull(),
  transmits: boolean('transmits').notNull(),
  receives: boolean('receives').notNull(),
  /** Sky frequencies: behind a converter, what comes out of or goes into it. */
  tuneLowHz: real('tune_low_hz').notNull(),
  tuneHighHz: real('tune_high_hz').notNull(),
  stepHz: real('step_hz').notNull(),
  offsetHz: real('offset_hz').notNull().default(0),
  minDwellS: real('min_dwell_s').notNull().default(1),
  latencyMs: real('latency_ms').notNull().default(50),
  latencyUncertaintyMs: real('latency_uncertainty_ms').notNull().default(0),
  referencePpm: real('reference_ppm').notNull().default(0),
  ramps: boolean('ramps').notNull().default(false),
  slopeStepHzPerS: real('slope_step_hz_per_s'),
  maxSlopeHzPerS: real('max_slope_hz_per_s'),
  planMode: text('plan_mode').$type<'fewest' | 'cadence'>().notNull().default('fewest'),
  cadenceS: real('cadence_s'),
  /** Local oscillator of a converter between dial and sky; null for none. */
  converterLoHz: real('converter_lo_hz'),
  converterInverts: boolean('converter_inverts').notNull().default(false),
  retiredAt: instant('retired_at'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('radios_name_unique').on(t.antennaId, sql`lower(${t.name})`).where(sql`${t.retiredAt} IS NULL`),
  index('radios_antenna').on(t.antennaId),
  check('radios_range', sql`${t.tuneLowHz} > 0 AND ${t.tuneLowHz} < ${t.tuneHighHz}`),
  check('radios_step_positive', sql`${t.stepHz} > 0 AND ${t.minDwellS} >= 0 AND ${t.latencyMs} >= 0 AND ${t.latencyUncertaintyMs} >= 0 AND ${t.referencePpm} >= 0`),
  check('radios_does_something', sql`${t.transmits} OR ${t.receives}`),
  check('radios_ramp_stated', sql`(${t.slopeStepHzPerS} IS NULL OR ${t.slopeStepHzPerS} > 0) AND (${t.maxSlopeHzPerS} IS NULL OR ${t.maxSlopeHzPerS} > 0)
    AND (NOT ${t.ramps} OR (${t.slopeStepHzPerS} IS NOT NULL AND ${t.maxSlopeHzPerS} IS NOT NULL AND ${t.slopeStepHzPerS} <= ${t.maxSlopeHzPerS}))`),
  check('radios_plan_mode_stated', sql`${t.planMode} IN ('fewest', 'cadence') AND (${t.cadenceS} IS NULL OR ${t.cadenceS} > 0) AND (${t.planMode} = 'fewest' OR ${t.cadenceS} IS NOT NULL)`),
  check('radios_converter_side', sql`CASE WHEN ${t.converterLoHz} IS NULL THEN NOT ${t.converterInverts}
    WHEN ${t.converterInverts} THEN ${t.converterLoHz} > ${t.tuneHighHz} ELSE ${t.converterLoHz} > 0 AND ${t.converterLoHz} < ${t.tuneLowHz} END`),
])

/** Where a link at a station is published at other times than the station's own. */
export const publicationRules = pgTable('publication_rules', {
  id: id(),
  stationId: uuid('station_id').notNull().references(() => stations.id, { onDelete: 'cascade' }),
  linkId: uuid('link_id').notNull().references(() => links.id, { onDelete: 'cascade' }),
  /** Local time of the station, HH:MM; null for the station's own. */
  publishAt: text('publish_at'),
  leadMinutes: integer('lead_minutes'),
  createdAt: createdAt(),
}, t => [
  uniqueIndex('publication_rules_station_link_unique').on(t.stationId, t.linkId),
  index('publication_rules_link').on(t.linkId),
  check('publication_rules_publish_at_form', sql`${t.publishAt} ~ '^([01][0-9]|2[0-3]):[0-5][0-9]$'`),
  check('publication_rules_lead_range', sql`${t.leadMinutes} BETWEEN 1 AND 1440`),
])

/** No retune inside it: of a station, or only of one spacecraft or link. */
export const quietSpans = pgTable('quiet_spans', {
  id: id(),
  stationId: uuid('station_id').references(() => stations.id, { onDelete: 'cascade' }),
  spacecraftId: uuid('spacecraft_id').references(() => spacecraft.id, { onDelete: 'cascade' }),
  linkId: uuid('link_id').references(() => links.id, { onDelete: 'cascade' }),
  startsAt: instant('starts_at').notNull(),
  endsAt: instant('ends_at').notNull(),
  reason: text('reason').notNull(),
  enteredBy: text('entered_by').notNull(),
  cancelledAt: instant('cancelled_at'),
  cancelledBy: text('cancelled_by'),
  createdAt: createdAt(),
}, t => [
  index('quiet_spans_station').on(t.stationId, t.startsAt),
  index('quiet_spans_spacecraft').on(t.spacecraftId),
  index('quiet_spans_link').on(t.linkId),
  check('quiet_spans_of_something', sql`num_nonnulls(${t.stationId}, ${t.spacecraftId}, ${t.linkId}) >= 1`),
  check('quiet_spans_order', sql`${t.startsAt} < ${t.endsAt}`),
])
