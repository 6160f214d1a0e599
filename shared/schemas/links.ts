import { z } from 'zod'
import { occupiedBandwidthHz } from '../physics/link/occupied-bandwidth'
import type { Detector } from '../physics/types'
import { atLeastZero, idSchema, instantOut, nameSchema, positive, reasonSchema, shortTextSchema } from './common'

export const directionSchema = z.enum(['uplink', 'downlink'])
/** In the order in which they are offered. */
export const detectors = ['quadrature', 'coherent', 'msk', 'differential', 'fsk', 'multicarrier', 'chirp', 'stated'] as const satisfies readonly Detector[]
export const detectorSchema = z.enum(detectors)

const hz = positive().max(1e12)
export const spreadingFactor = z.number().int().min(5).max(12)
export const esN0Db = z.number().min(-50).max(100)
/** Smaller figures mean nothing, and dividing by them overflows. */
const carrierHz = z.number().min(1).max(1e12)
const fields = {
  name: nameSchema,
  direction: directionSchema,
  carrierHz,
  bandLowHz: hz,
  bandHighHz: hz,
  symbolRateHz: z.number().min(1e-3).max(1e10),
  modulation: shortTextSchema.min(1, 'Name the modulation, such as BPSK.'),
  detector: detectorSchema,
  permittedLossDb: positive().max(20),
  captureRangeHz: hz.nullable(),
  filterBandwidthHz: hz.nullable(),
  rolloff: z.number().min(0).max(1).nullable(),
  /** Allowance of a link whose detector is stated, from the modem's data sheet. */
  limitHz: hz.nullable(),
  /** Bandwidth of a chirp; of many subcarriers where it is to count against the filter. */
  bandwidthHz: hz.nullable(),
  /** Of a chirp. */
  spreadingFactor: spreadingFactor.nullable(),
  /** Es/N0 that a multicarrier link works at. */
  esN0Db,
  driftLimitHzPerS: positive().max(1e9).nullable(),
  jumpLimitHz: hz.nullable(),
  errorRate: z.number().min(1e-100).lt(0.5),
  minElevationDeg: atLeastZero().lt(90),
  approveWhatHolds: z.boolean(),
}

/** What a detector needs beside the symbol rate. */
export interface DetectorNumbers { detector: string, limitHz: number | null, bandwidthHz: number | null, spreadingFactor: number | null }
interface LinkNumbers extends DetectorNumbers { carrierHz: number, bandLowHz: number, bandHighHz: number, symbolRateHz: number, filterBandwidthHz: number | null, rolloff: number | null }

/** What a link's detector lacks. */
export function detectorProblems(link: DetectorNumbers): { path: string, message: string }[] {
  const problems: { path: string, message: string }[] = []
  if (link.detector === 'stated' && link.limitHz === null) problems.push({ path: 'limitHz', message: 'A stated detector needs its limit in hertz from the modem’s data sheet.' })
  if (link.detector === 'chirp' && link.bandwidthHz === null) problems.push({ path: 'bandwidthHz', message: 'A chirp needs the bandwidth that it sweeps, Hz.' })
  if (link.detector === 'chirp' && link.spreadingFactor === null) problems.push({ path: 'spreadingFactor', message: 'A chirp needs its spreading factor, 5 to 12.' })
  return problems
}

/** Rules between fields; the server runs them again on the link as it would stand after a change. */
export function linkProblems(link: LinkNumbers): { path: string, message: string }[] {
  const problems = detectorProblems(link)
  if (link.bandLowHz > link.carrierHz || link.carrierHz > link.bandHighHz) problems.push({ path: 'carrierHz', message: 'The carrier lies outside the licensed band: mend the carrier or the band’s edges.' })
  const occupiedHz = occupiedBandwidthHz(link)
  if (link.filterBandwidthHz !== null && occupiedHz >= link.filterBandwidthHz) problems.push({ path: 'filterBandwidthHz', message: `The receiver’s filter is narrower than the signal: more than ${Number(occupiedHz.toPrecision(6))} Hz is needed.` })
  return problems
}
const checked = <T extends z.ZodType<LinkNumbers>>(schema: T) => schema.superRefine((link, ctx) => {
  for (const problem of linkProblems(link)) ctx.addIssue({ code: 'custom', path: [problem.path], message: problem.message })
})

export const createLinkBody = checked(z.strictObject({
  spacecraftId: idSchema,
  ...fields,
  permittedLossDb: fields.permittedLossDb.default(0.5),
  captureRangeHz: fields.captureRangeHz.default(null),
  filterBandwidthHz: fields.filterBandwidthHz.default(null),
  rolloff: fields.rolloff.default(null),
  limitHz: fields.limitHz.default(null),
  bandwidthHz: fields.bandwidthHz.default(null),
  spreadingFactor: fields.spreadingFactor.default(null),
  esN0Db: fields.esN0Db.default(20),
  driftLimitHzPerS: fields.driftLimitHzPerS.default(null),
  jumpLimitHz: fields.jumpLimitHz.default(null),
  errorRate: fields.errorRate.default(1e-5),
  minElevationDeg: fields.minElevationDeg.default(0),
  /** Left out: on for a downlink, off for an uplink. */
  approveWhatHolds: fields.approveWhatHolds.optional(),
}))
/** Loosening a limit needs a reason. */
export const changeLinkBody = z.strictObject(fields).partial().extend({ reason: reasonSchema.optional() })
export const linkOut = z.object({
  id: idSchema, spacecraftId: idSchema, spacecraftName: z.string(), ...fields,
  allowanceHz: z.number(), limitedBy: z.string(), symbolTimeS: z.number(),
  retiredAt: instantOut.nullable(),
})
export type LinkOut = z.infer<typeof linkOut>
