import { z } from 'zod'
import { idSchema, instantOut } from './common'

export const serverOut = z.object({
  id: idSchema, host: z.string(), pid: z.number().int(), role: z.enum(['server', 'worker']), state: z.enum(['alive', 'silent', 'stopped']),
  startedAt: instantOut, seenAt: instantOut, stoppedAt: instantOut.nullable(),
})
/** What came of the last call outward. */
export const serverHeartbeatSchema = z.object({ at: instantOut, ok: z.boolean(), detail: z.string() })
export const serversOut = z.object({ items: z.array(serverOut), heartbeat: z.object({ url: z.string().nullable(), last: serverHeartbeatSchema.nullable() }) })
export type ServersOut = z.infer<typeof serversOut>
