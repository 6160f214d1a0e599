import { z } from 'zod'
import type { Direction } from '../physics/types'
import { canonicalJsonBytes } from './canonical-json'

const instant = z.iso.datetime({ precision: 3 }).describe('UTC, milliseconds, Z')
const id = z.string().min(1)
const name = z.string().min(1)
const hz = z.number()

export const publishedRetuneSchema = z.strictObject({
  at: instant.describe('When to command; the radio follows latencyMs later'),
  frequencyHz: hz.positive().describe('What to set on the radio’s dial'),
  slopeHzPerS: z.number().describe('Of the dial, from the instant of effect on'),
  dopplerHz: hz.describe('One-way shift of the carrier; uplink: frequency to transmit minus carrier'),
  rangeRateMps: z.number().describe('Positive when receding'),
  azimuthDeg: z.number(),
  elevationDeg: z.number(),
  residualMinHz: hz,
  residualMaxHz: hz,
  lossDb: z.number().nullable().describe('Null for a detector with a limit and no curve'),
})

/** A published revision of a tuning table: what is digested, signed and served, without digest and signature. */
export const publishedTableSchema = z.strictObject({
  id,
  revision: z.int().positive(),
  publishedAt: instant,
  pass: z.strictObject({
    id,
    spacecraft: z.strictObject({ id, name, catalogueNumber: z.string().nullable() }),
    station: z.strictObject({ id, name }),
    aos: instant,
    culmination: instant,
    los: instant,
    maxElevationDeg: z.number(),
  }),
  link: z.strictObject({
    id,
    name,
    direction: z.enum(['uplink', 'downlink']),
    carrierHz: hz.positive(),
    symbolRateHz: hz.positive(),
    bandLowHz: hz.nullable(),
    bandHighHz: hz.nullable(),
    turnaround: z.strictObject({ numerator: z.int().positive(), denominator: z.int().positive(), uplinkPrecompensated: z.boolean() }).optional()
      .describe('Of a coherent downlink: downlink = numerator/denominator × what the spacecraft hears'),
  }),
  radio: z.strictObject({
    id,
    name,
    stepHz: hz.positive(),
    offsetHz: hz,
    minDwellS: z.number().nonnegative(),
    latencyMs: z.number(),
    ramp: z.strictObject({ slopeStepHzPerS: z.number().positive(), maxSlopeHzPerS: z.number().positive() }).optional().describe('Of a radio that ramps'),
    converter: z.strictObject({ loHz: hz.positive(), inverts: z.boolean() }).optional()
      .describe('Of a radio behind a converter: sky = loHz + dial, or loHz − dial where it inverts'),
  }),
  plan: z.strictObject({ mode: z.enum(['fewest', 'cadence']), cadenceS: z.number().positive().nullable() }).optional()
    .describe('How the rows were chosen: as few as hold, or one every cadenceS. Not in revisions of former versions'),
  verdict: z.enum(['holds', 'tight', 'breaks']),
  allowanceHz: hz.nonnegative(),
  limitedBy: z.enum(['loss', 'captureRange', 'filter', 'stated']),
  worstResidualHz: hz.nonnegative(),
  worstAt: instant,
  margin: z.number().nonnegative(),
  budget: z.strictObject({ stepsHz: hz, timingHz: hz, ut1Hz: hz, orbitHz: hz, oscillatorHz: hz, trimHz: hz }),
  symbolClockPpm: z.strictObject({ min: z.number(), max: z.number() }),
  elementSet: z.strictObject({
    id,
    epoch: z.iso.datetime().describe('UTC, Z, to the microsecond where the set gives it'),
    sha256: z.string().regex(/^[0-9a-f]{64}$/),
  }),
  supersedes: z.strictObject({ revision: z.int().positive(), reason: z.string().min(1) }).nullable(),
  retunes: z.array(publishedRetuneSchema).min(1),
  caution: z.string().min(1),
})

/** What a station receives. */
export const servedTableSchema = publishedTableSchema.extend({
  digest: z.string().regex(/^[0-9a-f]{64}$/).describe('SHA-256, hexadecimal, of the canonical JSON (RFC 8785) without digest and signature'),
  signature: z.string().regex(/^[\w-]+\.\.[\w-]+$/).describe('Detached JWS (RFC 7515 appendix F), EdDSA, over the same bytes'),
})

export type PublishedRetune = z.infer<typeof publishedRetuneSchema>
export type PublishedTable = z.infer<typeof publishedTableSchema>
export type ServedTable = z.infer<typeof servedTableSchema>

const CAUTIONS: Readonly<Record<Direction, string>> = {
  uplink: 'Transmitting needs a licence and a coordinated frequency. This table is advice to licensed operators, who answer for what they radiate. The station\'s own interlocks and local rules come first.',
  downlink: 'This table is advice to the station\'s operators. The station\'s own interlocks and local rules come first.',
}

/** The caution that every published table carries. */
export function cautionFor(direction: Direction): string {
  return CAUTIONS[direction]
}

/**
 * The bytes that are digested (SHA-256) and signed: canonical JSON (RFC 8785) of the table without `digest` and `signature`.
 * @throws TypeError when a value has no canonical form
 */
export function canonicalTableBytes(table: PublishedTable | ServedTable): Uint8Array {
  const { digest: _digest, signature: _signature, ...published } = table as ServedTable
  return canonicalJsonBytes(published)
}
