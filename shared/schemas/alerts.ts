import { z } from 'zod'
import { idSchema, instantOut, pageQuery, reasonSchema } from './common'

export const alertKinds = ['residual-ahead', 'published-table-breaks', 'not-collected', 'elements-old', 'publication-failed', 'decision-due', 'station-refused',
  'antenna-conflict', 'upload-refused', 'auto-use-declined', 'slots-missed', 'server-silent', 'web-hook-failing'] as const
export const alertsQuery = pageQuery.extend({ state: z.enum(['open', 'acknowledged', 'closed', 'standing']).optional() })
export const alertOut = z.object({
  id: idSchema,
  kind: z.enum(alertKinds),
  severity: z.enum(['call', 'notice']),
  state: z.enum(['open', 'acknowledged', 'closed']),
  title: z.string(), detail: z.string(), action: z.string(),
  spacecraftId: idSchema.nullable(), spacecraftName: z.string().nullable(), stationId: idSchema.nullable(), stationName: z.string().nullable(),
  tableId: idSchema.nullable(), passId: idSchema.nullable(),
  dueAt: instantOut.nullable(), count: z.number().int(),
  openedAt: instantOut, acknowledgedAt: instantOut.nullable(), acknowledgedBy: z.string().nullable(),
  closedAt: instantOut.nullable(), closedBy: z.string().nullable(), closeReason: z.string().nullable(),
  mails: z.array(z.object({ to: z.string(), state: z.enum(['queued', 'sent', 'failed']), attempts: z.number().int(), lastError: z.string().nullable(), sentAt: instantOut.nullable() })),
})
export type AlertOut = z.infer<typeof alertOut>
export const closeAlertBody = z.strictObject({ reason: reasonSchema.optional() }).optional()

export const mailOut = z.object({ id: idSchema, kind: z.string(), to: z.string(), subject: z.string(), state: z.enum(['queued', 'sent', 'failed']), attempts: z.number().int(), lastError: z.string().nullable(), createdAt: instantOut, sentAt: instantOut.nullable() })
export const receivedMailOut = z.object({ id: idSchema, from: z.string(), to: z.array(z.string()), subject: z.string(), text: z.string(), html: z.string().nullable(), receivedAt: instantOut })
