import { z } from 'zod'
import { idSchema, instantOut, instantQuerySchema, instantSchema, pageQuery, reasonSchema } from './common'

const names = { stationId: idSchema.nullable(), spacecraftId: idSchema.nullable(), linkId: idSchema.nullable() }

/** What is named must all match: a station alone is quiet for every spacecraft. */
export const createQuietSpanBody = z.strictObject({
  stationId: names.stationId.default(null),
  spacecraftId: names.spacecraftId.default(null),
  linkId: names.linkId.default(null),
  startsAt: instantSchema,
  endsAt: instantSchema,
  reason: reasonSchema,
}).superRefine(({ stationId, spacecraftId, linkId, startsAt, endsAt }, ctx) => {
  if (stationId === null && spacecraftId === null && linkId === null) ctx.addIssue({ code: 'custom', path: ['stationId'], message: 'Name a station, a spacecraft or a link.' })
  if (!(startsAt < endsAt)) ctx.addIssue({ code: 'custom', path: ['endsAt'], message: 'The end comes after the beginning.' })
})

export const quietSpansQuery = pageQuery.extend({
  /** Those that concern it: what names another is left out, what names none is not. */
  stationId: idSchema.optional(),
  spacecraftId: idSchema.optional(),
  linkId: idSchema.optional(),
  from: instantQuerySchema.optional(),
  to: instantQuerySchema.optional(),
  /** `standing`: not cancelled. */
  state: z.enum(['standing', 'cancelled']).optional(),
})

export const quietSpanOut = z.object({
  id: idSchema,
  ...names,
  stationName: z.string().nullable(), spacecraftName: z.string().nullable(), linkName: z.string().nullable(),
  startsAt: instantOut, endsAt: instantOut,
  reason: z.string(),
  enteredBy: z.string(), createdAt: instantOut,
  cancelledAt: instantOut.nullable(), cancelledBy: z.string().nullable(),
})
export type QuietSpanOut = z.infer<typeof quietSpanOut>
export const cancelQuietSpanBody = z.strictObject({ reason: reasonSchema.optional() }).optional()
