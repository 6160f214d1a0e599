import { z } from 'zod'
import { atLeastZero, idSchema, instantOut, nameSchema, positive, zoneSchema } from './common'

export const maskSchema = z.array(z.strictObject({ azimuthDeg: z.number().min(0).max(360), elevationDeg: z.number().min(0).max(90) })).max(720)
  .refine(points => new Set(points.map(p => p.azimuthDeg % 360)).size === points.length, 'Each azimuth once.')
  .transform(points => [...points].sort((a, b) => a.azimuthDeg - b.azimuthDeg))

const stationFields = {
  name: nameSchema,
  latitudeDeg: z.number().min(-90).max(90),
  longitudeDeg: z.number().min(-180).max(180),
  heightM: z.number().min(-500).max(9000),
  minElevationDeg: atLeastZero().lt(90),
  mask: maskSchema,
  zone: zoneSchema,
  publishAt: z.string().regex(/^([01]\d|2[0-3]):[0-5]\d$/, 'Write the time as 18:00.'),
  publishLeadMinutes: z.number().int().min(1).max(1440),
  freezeMinutes: z.number().int().min(0).max(1440),
  clockErrorMs: atLeastZero().max(60_000),
}
export const createStationBody = z.strictObject({
  ...stationFields,
  minElevationDeg: stationFields.minElevationDeg.default(5),
  mask: maskSchema.default([]),
  publishAt: stationFields.publishAt.default('18:00'),
  publishLeadMinutes: stationFields.publishLeadMinutes.default(60),
  freezeMinutes: stationFields.freezeMinutes.default(10),
  clockErrorMs: stationFields.clockErrorMs.default(0),
})
export const changeStationBody = z.strictObject(stationFields).partial()

/** A link's own times at a station; null for the station's. Both null is no rule. */
export const setPublicationRuleBody = z.strictObject({ stationId: idSchema, linkId: idSchema, publishAt: stationFields.publishAt.nullable().default(null), leadMinutes: stationFields.publishLeadMinutes.nullable().default(null) })
  .refine(rule => rule.publishAt !== null || rule.leadMinutes !== null, { path: ['publishAt'], message: 'Give a time of day or a lead: with neither the link follows the station.' })
export const publicationRulesQuery = z.strictObject({ stationId: idSchema.optional(), linkId: idSchema.optional() })
export const publicationRuleOut = z.object({ id: idSchema, stationId: idSchema, stationName: z.string(), linkId: idSchema, linkName: z.string(), spacecraftName: z.string(), publishAt: z.string().nullable(), leadMinutes: z.number().int().nullable() })
export type PublicationRuleOut = z.infer<typeof publicationRuleOut>

const antennaFields = { name: nameSchema, setupS: atLeastZero().max(86_400) }
export const createAntennaBody = z.strictObject({ stationId: idSchema, ...antennaFields, setupS: antennaFields.setupS.default(120) })
export const changeAntennaBody = z.strictObject(antennaFields).partial()

const slope = z.number().min(1e-6).max(1e9)
const radioFields = {
  name: nameSchema,
  transmits: z.boolean(),
  receives: z.boolean(),
  tuneLowHz: positive().max(1e12),
  tuneHighHz: positive().max(1e12),
  stepHz: z.number().min(1e-3).max(1e9),
  offsetHz: z.number().min(-1e12).max(1e12),
  minDwellS: atLeastZero().max(3600),
  latencyMs: atLeastZero().max(60_000),
  latencyUncertaintyMs: atLeastZero().max(60_000),
  referencePpm: atLeastZero().max(1000),
  ramps: z.boolean(),
  slopeStepHzPerS: slope.nullable(),
  maxSlopeHzPerS: slope.nullable(),
  planMode: z.enum(['fewest', 'cadence']),
  /** Of mode `cadence`: a retune every so many seconds. */
  cadenceS: z.number().min(0.1).max(3600).nullable(),
  /** Local oscillator of a converter between dial and sky; sky = oscillator + dial, or oscillator − dial where it inverts. */
  converterLoHz: positive().max(1e12).nullable(),
  converterInverts: z.boolean(),
}
interface RadioNumbers {
  transmits: boolean
  receives: boolean
  tuneLowHz: number
  tuneHighHz: number
  minDwellS: number
  ramps: boolean
  slopeStepHzPerS: number | null
  maxSlopeHzPerS: number | null
  planMode: 'fewest' | 'cadence'
  cadenceS: number | null
  converterLoHz: number | null
  converterInverts: boolean
}

/** Rules between fields; the server runs them again on the radio as it would stand after a change. */
export function radioProblems(radio: RadioNumbers): { path: string, message: string }[] {
  const problems: { path: string, message: string }[] = []
  if (!radio.transmits && !radio.receives) problems.push({ path: 'receives', message: 'A radio transmits, receives or both.' })
  if (radio.tuneLowHz >= radio.tuneHighHz) problems.push({ path: 'tuneHighHz', message: 'The upper edge of the tuning range lies above the lower.' })
  problems.push(...rampProblems(radio))
  if (radio.planMode === 'cadence' && radio.cadenceS === null) problems.push({ path: 'cadenceS', message: 'Give the seconds from retune to retune.' })
  else if (radio.planMode === 'cadence' && radio.cadenceS! < radio.minDwellS) problems.push({ path: 'cadenceS', message: `The radio needs ${radio.minDwellS} s between retunes: give no less.` })
  const { converterLoHz, converterInverts } = radio
  if (converterLoHz === null && converterInverts) problems.push({ path: 'converterLoHz', message: 'Give the oscillator of the converter that inverts, or leave inversion out.' })
  if (converterLoHz !== null && converterInverts && converterLoHz <= radio.tuneHighHz) problems.push({ path: 'converterLoHz', message: 'A converter inverts where its oscillator lies above the whole tuning range.' })
  if (converterLoHz !== null && !converterInverts && converterLoHz >= radio.tuneLowHz) problems.push({ path: 'converterLoHz', message: 'Without inversion the oscillator lies below the whole tuning range; one above inverts.' })
  return problems
}
/** A radio that ramps states by what steps and how steeply; one of the bench alike. */
export function rampProblems({ ramps, slopeStepHzPerS, maxSlopeHzPerS }: Pick<RadioNumbers, 'ramps' | 'slopeStepHzPerS' | 'maxSlopeHzPerS'>): { path: string, message: string }[] {
  if (!ramps) return []
  if (slopeStepHzPerS === null) return [{ path: 'slopeStepHzPerS', message: 'A radio that ramps needs the step of its slopes, in Hz/s.' }]
  if (maxSlopeHzPerS === null) return [{ path: 'maxSlopeHzPerS', message: 'A radio that ramps needs its steepest slope, in Hz/s.' }]
  return maxSlopeHzPerS < slopeStepHzPerS ? [{ path: 'maxSlopeHzPerS', message: 'The steepest slope is one step at least.' }] : []
}
export const createRadioBody = z.strictObject({
  antennaId: idSchema,
  ...radioFields,
  offsetHz: radioFields.offsetHz.default(0),
  minDwellS: radioFields.minDwellS.default(1),
  latencyMs: radioFields.latencyMs.default(50),
  latencyUncertaintyMs: radioFields.latencyUncertaintyMs.default(0),
  referencePpm: radioFields.referencePpm.default(0),
  ramps: radioFields.ramps.default(false),
  slopeStepHzPerS: radioFields.slopeStepHzPerS.default(null),
  maxSlopeHzPerS: radioFields.maxSlopeHzPerS.default(null),
  planMode: radioFields.planMode.default('fewest'),
  cadenceS: radioFields.cadenceS.default(null),
  converterLoHz: radioFields.converterLoHz.default(null),
  converterInverts: radioFields.converterInverts.default(false),
}).superRefine((radio, ctx) => {
  for (const problem of radioProblems(radio)) ctx.addIssue({ code: 'custom', path: [problem.path], message: problem.message })
})
export const changeRadioBody = z.strictObject(radioFields).partial()

export const radioOut = z.object({ id: idSchema, antennaId: idSchema, antennaName: z.string(), stationId: idSchema, stationName: z.string(), ...radioFields, retiredAt: instantOut.nullable() })
export const antennaOut = z.object({ id: idSchema, stationId: idSchema, ...antennaFields, retiredAt: instantOut.nullable(), radios: z.array(radioOut) })
export const stationOut = z.object({ id: idSchema, ...stationFields, mask: z.array(z.object({ azimuthDeg: z.number(), elevationDeg: z.number() })), retiredAt: instantOut.nullable(), antennas: z.array(antennaOut) })
export type StationOut = z.infer<typeof stationOut>
export type AntennaOut = z.infer<typeof antennaOut>
export type RadioOut = z.infer<typeof radioOut>
