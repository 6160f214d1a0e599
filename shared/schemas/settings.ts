import { z } from 'zod'
import { instantOut, instantSchema, zoneSchema } from './common'

/** All settings with their defaults; what an administrator has not set stands at these. */
export const settingsSchema = z.strictObject({
  organisation: z.string().trim().min(1).max(80).default('Nullbeat'),
  horizonDays: z.number().int().min(3).max(14).default(7),
  ut1: z.strictObject({
    /** UT1 − UTC from the IERS bulletins. */
    ut1MinusUtcS: z.number().min(-0.9).max(0.9),
    validUntil: instantSchema,
  }).nullable().default(null),
  /** Spreads count this many times. */
  k: z.number().min(1).max(5).default(2),
  digestZone: zoneSchema.default('UTC'),
  digestAt: z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Write the time as 18:00.').default('18:00'),
  /** One sigma along track at the epoch and growth for perigees under and above 800 km. */
  prior: z.strictObject({
    lowFloorKm: z.number().positive().max(1000), lowGrowthKmPerDay: z.number().min(0).max(1000),
    highFloorKm: z.number().positive().max(1000), highGrowthKmPerDay: z.number().min(0).max(1000),
  }).default({ lowFloorKm: 0.5, lowGrowthKmPerDay: 1.5, highFloorKm: 0.3, highGrowthKmPerDay: 0.5 }),
})
export type Settings = z.infer<typeof settingsSchema>
export const changeSettingsBody = settingsSchema.partial()
export const settingsOut = z.object({
  settings: z.object(settingsSchema.shape),
  demo: z.boolean(),
  mail: z.object({ local: z.boolean(), queued: z.number().int(), failed: z.number().int() }),
})
export const slotsOut = z.object({
  coming: z.array(z.object({ kind: z.string(), entity: z.string(), name: z.string(), at: instantOut, local: z.string() })),
  done: z.array(z.object({ kind: z.string(), entity: z.string(), name: z.string(), at: instantOut, doneAt: instantOut, outcome: z.string() })),
})
