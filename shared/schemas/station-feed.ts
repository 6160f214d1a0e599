import { z } from 'zod'
import { idSchema, instantOut, instantQuerySchema, listOf, pageQuery, reasonSchema } from './common'
import { revisionStateSchema } from './tables'

export const feedQuery = pageQuery.extend({ from: instantQuerySchema.optional(), to: instantQuerySchema.optional() })
export const feedListOut = listOf(z.object({
  id: idSchema, revision: z.number().int(), state: revisionStateSchema, digest: z.string(), eTag: z.string(), publishedAt: instantOut,
  pass: z.object({ id: idSchema, spacecraftName: z.string(), aos: instantOut, culmination: instantOut, los: instantOut }),
  link: z.object({ id: idSchema, name: z.string(), direction: z.enum(['uplink', 'downlink']) }),
}))
export const reportBody = z.strictObject({ revision: z.number().int().min(1), outcome: z.enum(['loaded', 'refused']), reason: reasonSchema.optional() })
  .refine(report => report.outcome === 'loaded' || report.reason !== undefined, { path: ['reason'], message: 'Say why the table was refused.' })
export const jwkSetOut = z.object({ keys: z.array(z.object({ kty: z.string(), crv: z.string(), x: z.string(), kid: z.string(), alg: z.string(), use: z.string() })) })

/** `lastSignedAt`: within the last 90 days, null where it signed nothing in them. `served`: stations get its public half. */
export const signingKeyOut = z.object({ kid: z.string(), createdAt: instantOut, retiredAt: instantOut.nullable(), lastSignedAt: instantOut.nullable(), served: z.boolean() })
