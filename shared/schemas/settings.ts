import { z } from 'zod'
import { idSchema, instantOut, instantSchema, nameSchema, zoneSchema } from './common'

const fields = {
  organisation: nameSchema,
  horizonDays: z.number().int().min(3).max(14),
  /** UT1 − UTC from the IERS bulletins. */
  ut1: z.strictObject({ ut1MinusUtcS: z.number().min(-0.9).max(0.9), validUntil: instantSchema }).nullable(),
  /** Spreads count this many times. */
  k: z.number().min(1).max(5),
  digestZone: zoneSchema,
  digestAt: z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Write the time as 18:00.'),
  /** Called every minute while all is well. */
  heartbeatUrl: z.string().trim().min(1, 'Write the whole address, or leave it out.').max(500, 'At most 500 characters.').refine(text => URL.canParse(text), 'Write the whole address, such as https://watch.example/nullbeat.').nullable(),
  /** One sigma along track at the epoch and growth for perigees under and above 800 km. */
  prior: z.strictObject({
    lowFloorKm: z.number().positive().max(1000), lowGrowthKmPerDay: z.number().min(0).max(1000),
    highFloorKm: z.number().positive().max(1000), highGrowthKmPerDay: z.number().min(0).max(1000),
  }),
}
/** All settings with their defaults; what an administrator has not set stands at these. */
export const settingsSchema = z.strictObject({
  organisation: fields.organisation.default('Nullbeat'),
  horizonDays: fields.horizonDays.default(7),
  ut1: fields.ut1.default(null),
  k: fields.k.default(2),
  digestZone: fields.digestZone.default('UTC'),
  digestAt: fields.digestAt.default('18:00'),
  heartbeatUrl: fields.heartbeatUrl.default(null),
  prior: fields.prior.default({ lowFloorKm: 0.5, lowGrowthKmPerDay: 1.5, highFloorKm: 0.3, highGrowthKmPerDay: 0.5 }),
})
export type Settings = z.infer<typeof settingsSchema>
/** Without defaults: what a change leaves out stays as it is. */
export const changeSettingsBody = z.strictObject(fields).partial()
export const settingsOut = z.object({
  settings: z.object({ ...fields, ut1: z.object({ ut1MinusUtcS: z.number(), validUntil: instantOut }).nullable() }),
  demo: z.boolean(),
  mail: z.object({ local: z.boolean(), queued: z.number().int(), failed: z.number().int() }),
})
/** What a slot would publish if it came now; null for a slot that publishes nothing. */
const wouldPublish = { approved: z.number().int().nullable(), undecided: z.number().int().nullable() }
const comingSlot = z.object({ kind: z.string(), entity: z.string(), name: z.string(), at: instantOut, local: z.string(), ...wouldPublish })
export type ComingSlot = z.infer<typeof comingSlot>
export const slotsOut = z.object({
  coming: z.array(comingSlot),
  done: z.array(z.object({ kind: z.string(), entity: z.string(), name: z.string(), at: instantOut, doneAt: instantOut, outcome: z.string() })),
})

export const previewSlotsQuery = z.strictObject({
  stationId: idSchema,
  /** The times would be this link's own; left out: the station's. */
  linkId: idSchema.optional(),
  zone: zoneSchema.optional(),
  publishAt: fields.digestAt.optional(),
  leadMinutes: z.coerce.number().int().min(1).max(1440).optional(),
})
/** The slots of the next seven days: every evening, and the passes' own, some hundreds at most. */
export const previewSlotsOut = z.object({ evenings: z.array(comingSlot), leads: z.array(comingSlot), leadCount: z.number().int() })
export type PreviewSlots = z.infer<typeof previewSlotsOut>
