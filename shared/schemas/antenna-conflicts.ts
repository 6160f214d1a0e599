import { z } from 'zod'
import { revisionStates } from '../table-life'
import { idSchema, instantOut, instantQuerySchema, reasonSchema } from './common'

export const antennaConflictsQuery = z.strictObject({ from: instantQuerySchema.optional(), to: instantQuerySchema.optional(), stationId: idSchema.optional() })

const wantingPass = z.object({
  passId: idSchema,
  spacecraftId: idSchema, spacecraftName: z.string(), priority: z.number().int(),
  aos: instantOut, los: instantOut, maxElevationDeg: z.number(),
  /** The antenna is wanted from here, set-up included, to the end of the workable part. */
  busyFrom: instantOut, busyTo: instantOut,
  tables: z.array(z.object({ id: idSchema, linkName: z.string(), direction: z.enum(['uplink', 'downlink']), state: z.enum(revisionStates), standsDown: z.boolean() })),
})
export const antennaConflictOut = z.object({
  antennaId: idSchema, antennaName: z.string(), setupS: z.number(), stationId: idSchema, stationName: z.string(), stationZone: z.string(),
  /** By busy time. */
  passes: z.tuple([wantingPass, wantingPass]),
  /** Who has it unless somebody decides otherwise: the higher priority, then the earlier AOS. */
  defaultPassId: idSchema,
  /** Who has been given it; `by` is the schedule where it published without a person's decision. */
  given: z.object({ passId: idSchema, by: z.string(), at: instantOut, reason: z.string().nullable(), byDefault: z.boolean() }).nullable(),
})
export type AntennaConflictOut = z.infer<typeof antennaConflictOut>

export const giveAntennaBody = z.strictObject({ antennaId: idSchema, passId: idSchema, otherPassId: idSchema, reason: reasonSchema.optional() })
  .refine(({ passId, otherPassId }) => passId !== otherPassId, { path: ['otherPassId'], message: 'Name two passes.' })
