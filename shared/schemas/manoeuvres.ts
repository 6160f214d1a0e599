import { z } from 'zod'
import { atLeastZero, idSchema, instantOut, instantSchema, shortTextSchema } from './common'

export const addManoeuvreBody = z.strictObject({
  startsAt: instantSchema,
  endsAt: instantSchema,
  /** One sigma of the change of speed along the track that is not known beforehand. */
  speedSigmaMps: atLeastZero().max(5000),
  note: shortTextSchema.nullable().default(null),
}).refine(body => body.endsAt >= body.startsAt, { path: ['endsAt'], message: 'It ends before it begins.' })

export const manoeuvreOut = z.object({
  id: idSchema,
  spacecraftId: idSchema,
  startsAt: instantOut,
  endsAt: instantOut,
  speedSigmaMps: z.number(),
  note: z.string().nullable(),
  enteredBy: z.string(),
  createdAt: instantOut,
  cancelledAt: instantOut.nullable(),
  cancelledBy: z.string().nullable(),
  /** The set in use knows nothing of it: error budgets are wider after its start. */
  widens: z.boolean(),
})
export type ManoeuvreOut = z.infer<typeof manoeuvreOut>
