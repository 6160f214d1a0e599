import { randomBytes } from 'node:crypto'
import type { z } from 'zod'
import type { createWebHookBody, webHookCreated } from '#shared/schemas/web-hooks'
import { webHooks } from '~~/server/database/schema'
import { webHookPolicy } from '~~/server/outward/policy'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { getWebHook } from './read-web-hooks'
import { requireOutward } from './require-outward'

/** Standard Webhooks: 24 to 64 bytes, written in base64 behind whsec_. */
const secretBytes = 32

/** Makes a hook and gives its secret in the clear, this once. */
export async function createWebHook(deps: Deps, input: z.output<typeof createWebHookBody>): Promise<z.infer<typeof webHookCreated>> {
  await requireOutward(input.url, 'url', webHookPolicy())
  const secret = `whsec_${randomBytes(secretBytes).toString('base64')}`
  const id = await deps.db.transaction(async (tx) => {
    const [row] = await tx.insert(webHooks).values({ ...input, secret, createdBy: deps.actor.name, createdAt: deps.now }).returning({ id: webHooks.id })
    await recordAudit({ ...deps, db: tx }, { action: 'web-hook.create', entityKind: 'web-hook', entityId: row!.id, after: input })
    return row!.id
  })
  return { ...await getWebHook(deps, id), secret }
}
