import { z } from 'zod'
import { keyScopes, roles } from '../permissions'
import { idSchema, instantOut, nameSchema, zoneSchema } from './common'

export const roleSchema = z.enum(roles)
export const emailSchema = z.string().trim().toLowerCase().max(254).pipe(z.email('Write an e-mail address such as name@example.org.'))
export const passwordSchema = z.string().min(12, 'At least 12 characters.').max(128, 'At most 128 characters.')

export const signInBody = z.strictObject({
  email: z.string().max(254),
  password: z.string().max(128),
  code: z.string().max(20).optional(),
})

export const personOut = z.object({ id: idSchema, name: z.string(), email: z.string(), roles: z.array(roleSchema), zone: z.string() })
export type PersonOut = z.infer<typeof personOut>

export const personListed = personOut.extend({ state: z.enum(['invited', 'active', 'disabled']), lastSeenAt: instantOut.nullable() })
export const invitePersonBody = z.strictObject({ name: nameSchema, email: emailSchema, roles: z.array(roleSchema).min(1, 'Choose at least one role.'), zone: zoneSchema.default('UTC') })
export const changePersonBody = z.strictObject({
  name: nameSchema.optional(),
  roles: z.array(roleSchema).min(1, 'Choose at least one role.').optional(),
  zone: zoneSchema.optional(),
  disabled: z.boolean().optional(),
})
export const changeMeBody = z.strictObject({ zone: zoneSchema.optional(), name: nameSchema.optional() })
export const changePasswordBody = z.strictObject({ currentPassword: z.string().max(128), newPassword: passwordSchema })

/** First administrator: all; invitation: the password alone. */
export const takeUpLinkBody = z.strictObject({
  token: z.string().min(20).max(100),
  password: passwordSchema,
  name: nameSchema.optional(),
  email: emailSchema.optional(),
})
export const linkInfo = z.object({ kind: z.enum(['first-administrator', 'invitation']), name: z.string().nullable(), email: z.string().nullable() })

export const keyScopeSchema = z.enum(keyScopes)
export const createKeyBody = z.strictObject({ name: nameSchema, scope: keyScopeSchema, stationId: idSchema.nullable().default(null) })
  .refine(key => (key.scope === 'station') === (key.stationId !== null), { path: ['stationId'], message: 'A station key names its station; other keys name none.' })
export const keyOut = z.object({
  id: idSchema, name: z.string(), prefix: z.string(), scope: keyScopeSchema, stationId: idSchema.nullable(), stationName: z.string().nullable(),
  createdAt: instantOut, lastUsedAt: instantOut.nullable(), revokedAt: instantOut.nullable(),
})
/** The key itself is shown here once and never again. */
export const keyCreated = keyOut.extend({ key: z.string() })

export const auditOut = z.object({
  id: z.number(), at: instantOut, actorKind: z.string(), actorName: z.string(), action: z.string(), entityKind: z.string(), entityId: z.string(),
  reason: z.string().nullable(), before: z.unknown(), after: z.unknown(),
})
