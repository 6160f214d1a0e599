import { z } from 'zod'
import { atLeastZero, idSchema, instantOut, instantSchema, positive } from './common'
import { detectorProblems, detectorSchema, directionSchema, esN0Db, spreadingFactor, turnaroundTerm } from './links'
import type { DetectorNumbers } from './links'
import { rampProblems } from './stations'
import { budgetOut, retuneOut, verdictSchema } from './tables'

const orNull = <T extends z.ZodType>(schema: T) => schema.nullable().default(null)
const benchLinkFields = {
  direction: directionSchema.default('downlink'),
  carrierHz: z.number().min(1).max(1e12).default(437_500_000),
  symbolRateHz: z.number().min(1e-3).max(1e10).default(9600),
  detector: detectorSchema.default('quadrature'),
  permittedLossDb: positive().max(100).default(0.5),
  captureRangeHz: orNull(positive()),
  driftLimitHzPerS: orNull(positive()),
  jumpLimitHz: orNull(positive()),
  errorRate: z.number().min(1e-100).lt(0.5).default(1e-5),
  esN0Db: esN0Db.default(20),
  rolloff: orNull(z.number().min(0).max(1)),
  filterBandwidthHz: orNull(positive()),
  bandwidthHz: orNull(positive()),
  spreadingFactor: orNull(spreadingFactor),
  limitHz: orNull(positive()),
  /** Of a coherent transponder: the downlink it makes is numerator/denominator × the uplink it hears. */
  turnaround: orNull(z.strictObject({
    numerator: turnaroundTerm, denominator: turnaroundTerm,
    /** Nominal uplink; left out, the one that makes the carrier. */
    uplinkHz: orNull(z.number().min(1).max(1e12)),
    uplinkPrecompensated: z.boolean().default(false),
  })),
}
const needsShape = (link: DetectorNumbers & { direction: string, turnaround: object | null }, ctx: z.RefinementCtx) => {
  if (link.direction !== 'downlink' && link.turnaround !== null) ctx.addIssue({ code: 'custom', path: ['turnaround'], message: 'Only a downlink is made from an uplink: leave turnaround out.' })
  for (const problem of detectorProblems(link)) ctx.addIssue({ code: 'custom', path: [problem.path], message: problem.message })
}
export const benchLink = z.strictObject(benchLinkFields).superRefine(needsShape)
export const benchRadio = z.strictObject({
  stepHz: z.number().min(1e-3).max(1e9).default(10), offsetHz: z.number().min(-1e12).max(1e12).default(0), minDwellS: atLeastZero().max(3600).default(1),
  latencyMs: atLeastZero().max(60_000).default(50), latencyUncertaintyMs: atLeastZero().max(60_000).default(0),
  ramp: z.boolean().default(false),
  slopeStepHzPerS: orNull(z.number().min(1e-6).max(1e9)), maxSlopeHzPerS: orNull(z.number().min(1e-6).max(1e9)),
}).superRefine(({ ramp, ...radio }, ctx) => {
  for (const { path, message } of rampProblems({ ramps: ramp, ...radio })) ctx.addIssue({ code: 'custom', path: [path], message })
})
export const benchBudget = z.strictObject({
  clockErrorMs: atLeastZero().max(60_000).default(0), alongTrackSigmaS: atLeastZero().max(3600).default(0),
  spacecraftPpm: atLeastZero().max(1000).default(0), stationPpm: atLeastZero().max(1000).default(0),
  ut1BoundS: atLeastZero().max(1).default(0), k: z.number().min(0).max(10).default(2),
})
export const benchStation = z.strictObject({
  latitudeDeg: z.number().min(-90).max(90), longitudeDeg: z.number().min(-180).max(360), heightM: z.number().min(-1000).max(100_000).default(0),
  minElevationDeg: z.number().min(-5).lt(90).default(5),
  mask: z.array(z.strictObject({ azimuthDeg: z.number().min(0).max(360), elevationDeg: z.number().min(-5).max(90) })).max(1000).nullable().optional(),
})

export const benchPredictBody = z.strictObject({
  elements: z.union([z.strictObject({ text: z.string().min(1).max(100_000) }), z.strictObject({ elementSetId: idSchema })], { error: 'Give elements as { "text": … } with one element set, or { "elementSetId": … }.' }),
  station: z.union([z.strictObject({ stationId: idSchema }), benchStation], { error: 'Give a station with latitudeDeg, longitudeDeg and heightM, or { "stationId": … }.' }),
  from: instantSchema,
  to: instantSchema,
  /** Whole milliseconds, as instants are. */
  sampleIntervalS: z.number().min(0.01).max(3600).multipleOf(0.001, 'Give whole milliseconds, such as 0.5 or 0.333.').default(10),
  ut1MinusUtcS: z.number().min(-0.9).max(0.9).default(0),
  link: z.union([z.strictObject({ linkId: idSchema }), benchLink]).optional(),
  radio: z.union([z.strictObject({ radioId: idSchema }), benchRadio]).optional(),
  budget: benchBudget.optional(),
})
export type BenchPredictBody = z.infer<typeof benchPredictBody>

export const benchTable = z.object({
  verdict: verdictSchema, allowanceHz: z.number(), limitedBy: z.string(), worstResidualHz: z.number(), worstAt: instantOut, margin: z.number(), budget: budgetOut,
  excess: z.array(z.object({ from: instantOut, to: instantOut })),
  workable: z.array(z.object({ from: instantOut, to: instantOut })),
  faults: z.array(z.object({ code: z.string(), at: instantOut, message: z.string() })),
  retunes: z.array(retuneOut),
})
export const benchPredictOut = z.object({
  passes: z.array(z.object({
    aos: instantOut, culmination: instantOut, los: instantOut, maxElevationDeg: z.number(),
    aosClipped: z.boolean().optional(), losClipped: z.boolean().optional(),
    samples: z.array(z.object({
      at: instantOut, azimuthDeg: z.number(), elevationDeg: z.number(), rangeM: z.number(), rangeRateMps: z.number(), dopplerHz: z.number(), dopplerRateHzPerS: z.number(),
      /** What the spacecraft must be above there: mask and minimum elevations. */
      horizonDeg: z.number(),
      /** Budget beyond the steps: timing + UT1 + k·spread. */
      uncertaintyHz: z.number(),
    })),
    table: benchTable.nullable(),
  })),
  /** What the elements' reader warned of, and when they stop being usable inside the window. */
  notes: z.array(z.string()),
})
export type BenchPredictOut = z.infer<typeof benchPredictOut>

export const benchAllowanceBody = benchLink
export const benchAllowanceOut = z.object({ symbolTimeS: z.number(), epsilon: z.number(), allowanceHz: z.number(), limitedBy: z.enum(['loss', 'captureRange', 'filter', 'stated']) })
export const benchLossBody = z.strictObject({ ...benchLinkFields, offsetHz: z.number().min(-1e12).max(1e12) }).superRefine(needsShape)
export const benchLossOut = z.object({ epsilon: z.number(), lossDb: z.number().nullable(), bitErrorRate: z.number().optional() })
