import { z } from 'zod'
import { atLeastZero, idSchema, instantOut, nameSchema, positive } from './common'

export const catalogueNumberSchema = z.string().trim().regex(/^\d{1,9}$/, 'One to nine digits.')
export const designatorSchema = z.string().trim().max(20).regex(/^\d{4}-\d{3}[A-Z]{1,3}$/, 'Write the international designator as 2026-801A.')

/** When a waiting set goes into use without a person: newer, with no warning, and within all of these. */
export const autoUseRule = z.strictObject({
  /** Largest move of any coming rise, culmination or set. */
  maxShiftS: positive().max(600),
  /** Largest change of Doppler on any link, as a share of its allowance. */
  maxAllowanceShare: positive().max(1, 'At most 1: the whole allowance.'),
  /** Largest difference along the track over what the sets' age explains. */
  maxSigmas: positive().max(10),
})
export type AutoUseRule = z.infer<typeof autoUseRule>

const fields = {
  name: nameSchema,
  catalogueNumber: catalogueNumberSchema.nullable(),
  designator: designatorSchema.nullable(),
  oscillatorPpm: atLeastZero().max(1000),
  elementAgeLimitHours: positive().max(2400),
  alongTrackFloorKm: positive().max(1000).nullable(),
  alongTrackGrowthKmPerDay: atLeastZero().max(1000).nullable(),
  /** Null: a person decides on every set. */
  autoUse: autoUseRule.nullable(),
}
export const createSpacecraftBody = z.strictObject({
  ...fields,
  /** May be left out with fromElementSetId: then the set's. */
  name: fields.name.optional(),
  catalogueNumber: fields.catalogueNumber.default(null),
  designator: fields.designator.default(null),
  oscillatorPpm: fields.oscillatorPpm.default(0),
  elementAgeLimitHours: fields.elementAgeLimitHours.default(72),
  alongTrackFloorKm: fields.alongTrackFloorKm.default(null),
  alongTrackGrowthKmPerDay: fields.alongTrackGrowthKmPerDay.default(null),
  autoUse: fields.autoUse.default(null),
  /** Made from this held set in one step; the set then waits for it. */
  fromElementSetId: idSchema.optional(),
}).refine(body => body.name !== undefined || body.fromElementSetId !== undefined, { path: ['name'], message: 'Give a name.' })
export const changeSpacecraftBody = z.strictObject(fields).partial()
export const spacecraftOut = z.object({
  ...fields,
  id: idSchema,
  inUseSetId: idSchema.nullable(),
  inUseEpoch: instantOut.nullable(),
  /** Age of the elements in use, hours. */
  elementAgeHours: z.number().nullable(),
  waitingSets: z.number().int(),
  linkCount: z.number().int(),
  retiredAt: instantOut.nullable(),
})
const growth = { floorKm: z.number(), growthKmPerDay: z.number() }
/** One sigma along track: at an age of a days, floorKm + growthKmPerDay·a. */
export const accuracyOut = z.object({
  /** Where the figures come from: stated on the spacecraft, learned from pairs of its sets, or the settings' prior. */
  source: z.enum(['stated', 'learned', 'prior']),
  pairs: z.number().int(),
  ...growth,
  bins: z.array(z.object({ ageDays: z.number(), sigmaKm: z.number(), pairs: z.number().int() })),
  prior: z.object(growth),
  /** Where pairs=true asks for them: one set carried to the epoch of a later one, at most 600, positive where it ran ahead. */
  errors: z.array(z.object({ ageDays: z.number(), alongKm: z.number() })).optional(),
})
export const accuracyQuery = z.strictObject({ pairs: z.enum(['true', 'false']).optional() })
export type AccuracyOut = z.infer<typeof accuracyOut>
export type SpacecraftOut = z.infer<typeof spacecraftOut>
