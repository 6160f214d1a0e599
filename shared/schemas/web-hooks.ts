import { z } from 'zod'
import { webHookEvents } from '../web-hook-events'
import { idSchema, instantOut, nameSchema } from './common'

const eventsSchema = z.array(z.enum(webHookEvents)).min(1, 'Choose at least one event.').max(webHookEvents.length).transform(events => webHookEvents.filter(event => events.includes(event)))
/** Where it may lead is decided by the server, which knows what is public. */
const addressSchema = z.string().trim().min(1, 'Write the whole address, such as https://ops.example/told.').max(500, 'At most 500 characters.').refine(text => URL.canParse(text), 'Write the whole address, such as https://ops.example/told.')

export const createWebHookBody = z.strictObject({ name: nameSchema, url: addressSchema, events: eventsSchema })
export const changeWebHookBody = z.strictObject({ name: nameSchema.optional(), url: addressSchema.optional(), events: eventsSchema.optional(), enabled: z.boolean().optional() })

export const webHookOut = z.object({
  id: idSchema, name: z.string(), url: z.string(), events: z.array(z.enum(webHookEvents)), enabled: z.boolean(), createdBy: z.string(), createdAt: instantOut,
  /** Deliveries that wait for their next try, and that were given up. */
  queued: z.number().int(), failed: z.number().int(), lastDeliveredAt: instantOut.nullable(),
})
export type WebHookOut = z.infer<typeof webHookOut>
/** The secret, as Standard Webhooks writes it (whsec_…), is shown here once and never again. */
export const webHookCreated = webHookOut.extend({ secret: z.string() })

export const deliveryOut = z.object({
  id: idSchema, event: z.string(), body: z.string(), state: z.enum(['queued', 'delivered', 'failed']), attempts: z.number().int(),
  lastStatus: z.number().int().nullable(), lastError: z.string().nullable(), createdAt: instantOut, triedAt: instantOut.nullable(),
})
export type DeliveryOut = z.infer<typeof deliveryOut>
