import { z } from 'zod'
import { revisionStates } from '../table-life'
import { idSchema, instantOut, instantQuerySchema, pageQuery, reasonSchema } from './common'

export const verdictSchema = z.enum(['holds', 'tight', 'breaks'])
export const revisionStateSchema = z.enum(revisionStates)

export const passesQuery = pageQuery.extend({ from: instantQuerySchema.optional(), to: instantQuerySchema.optional(), stationId: idSchema.optional(), spacecraftId: idSchema.optional() })
export const tablesQuery = passesQuery.extend({ state: revisionStateSchema.optional(), verdict: verdictSchema.optional() })

export const tableBrief = z.object({
  id: idSchema,
  passId: idSchema,
  linkId: idSchema, linkName: z.string(), direction: z.enum(['uplink', 'downlink']), carrierHz: z.number(),
  spacecraftId: idSchema, spacecraftName: z.string(), stationId: idSchema, stationName: z.string(), stationZone: z.string(),
  aos: instantOut, culmination: instantOut, los: instantOut, maxElevationDeg: z.number(),
  revision: z.number().int(),
  state: revisionStateSchema,
  verdict: verdictSchema,
  margin: z.number(), worstResidualHz: z.number(), worstAt: instantOut, allowanceHz: z.number(),
  retuneCount: z.number().int(),
  reason: z.string().nullable(),
  approvedBy: z.string().nullable(), approvedById: idSchema.nullable(), secondedBy: z.string().nullable(),
  publishedAt: instantOut.nullable(), collectedAt: instantOut.nullable(),
  /** Of this revision, once it is published. */
  digest: z.string().nullable(),
  /** Newest revision that the station gets, when that is another one. */
  out: z.object({ revision: z.number().int(), state: revisionStateSchema, publishedAt: instantOut, collectedAt: instantOut.nullable(), verdict: verdictSchema, digest: z.string() }).nullable(),
  /** The instant at which the schedule publishes it if it is approved by then. */
  publishesAt: instantOut.nullable(),
  stationReport: z.object({ outcome: z.enum(['loaded', 'refused']), reason: z.string().nullable(), at: instantOut }).nullable(),
})
export type TableBrief = z.infer<typeof tableBrief>

export const retuneOut = z.object({
  at: instantOut, frequencyHz: z.number(), slopeHzPerS: z.number(), dopplerHz: z.number(), rangeRateMps: z.number(),
  azimuthDeg: z.number(), elevationDeg: z.number(), residualMinHz: z.number(), residualMaxHz: z.number(), lossDb: z.number().nullable(),
})
export const budgetOut = z.object({ stepsHz: z.number(), timingHz: z.number(), ut1Hz: z.number(), orbitHz: z.number(), oscillatorHz: z.number(), trimHz: z.number() })
export const tableOut = tableBrief.extend({
  limitedBy: z.string(),
  budget: budgetOut,
  k: z.number(),
  symbolClockPpm: z.object({ min: z.number(), max: z.number() }),
  excess: z.array(z.object({ from: instantOut, to: instantOut })),
  faults: z.array(z.object({ code: z.string(), at: instantOut, message: z.string() })),
  workable: z.array(z.object({ from: instantOut, to: instantOut })),
  radio: z.object({ id: idSchema, name: z.string(), stepHz: z.number(), offsetHz: z.number(), minDwellS: z.number(), latencyMs: z.number(),
    ramp: z.object({ slopeStepHzPerS: z.number(), maxSlopeHzPerS: z.number() }).nullable(),
    /** Sky = loHz + dial, or loHz − dial where it inverts; rows are for the dial. */
    converter: z.object({ loHz: z.number(), inverts: z.boolean() }).nullable() }),
  elementSet: z.object({ id: idSchema, epoch: instantOut, sha256: z.string() }),
  symbolRateHz: z.number(), bandLowHz: z.number(), bandHighHz: z.number(),
  digest: z.string().nullable(),
  retunes: z.array(retuneOut),
  history: z.array(z.object({ at: instantOut, action: z.string(), by: z.string(), reason: z.string().nullable(), revision: z.number().int().nullable() })),
  revisions: z.array(z.object({ revision: z.number().int(), state: revisionStateSchema, verdict: verdictSchema, worstResidualHz: z.number(), publishedAt: instantOut.nullable(), reason: z.string().nullable() })),
})
export type TableOut = z.infer<typeof tableOut>

/** `revision` guards against deciding on something that has changed since it was read. */
export const decideBody = z.strictObject({ revision: z.number().int().min(1).optional() }).optional()
export const holdBody = z.strictObject({ reason: reasonSchema, revision: z.number().int().min(1).optional() })
export const withdrawBody = z.strictObject({ reason: reasonSchema })

export const passOut = z.object({
  id: idSchema,
  spacecraftId: idSchema, spacecraftName: z.string(), stationId: idSchema, stationName: z.string(), stationZone: z.string(),
  elementSetId: idSchema,
  aos: instantOut, culmination: instantOut, los: instantOut, maxElevationDeg: z.number(),
  goneAt: instantOut.nullable(),
  tables: z.array(z.object({ id: idSchema, linkId: idSchema, linkName: z.string(), direction: z.enum(['uplink', 'downlink']), state: revisionStateSchema, verdict: verdictSchema, margin: z.number() })),
})
export type PassOut = z.infer<typeof passOut>

export const samplesQuery = z.strictObject({ stepS: z.coerce.number().min(0.1).max(600).default(10) })
export const passSamplesOut = z.object({
  passId: idSchema,
  samples: z.array(z.object({ at: instantOut, azimuthDeg: z.number(), elevationDeg: z.number(), horizonDeg: z.number(), rangeM: z.number(), rangeRateMps: z.number() })),
  links: z.array(z.object({
    linkId: z.string(), tableId: idSchema.nullable(), dopplerHz: z.array(z.number()), dopplerRateHzPerS: z.array(z.number()),
    /** Budget beyond the steps at each sample: timing + UT1 + k·spread. */
    uncertaintyHz: z.array(z.number()),
  })),
})
export type PassSamplesOut = z.infer<typeof passSamplesOut>
