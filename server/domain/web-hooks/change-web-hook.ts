import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { WebHookOut, changeWebHookBody } from '#shared/schemas/web-hooks'
import { webHooks } from '~~/server/database/schema'
import { webHookPolicy } from '~~/server/outward/policy'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { difference } from '../difference'
import { lockWebHook } from './lock-web-hook'
import { getWebHook } from './read-web-hooks'
import { requireOutward } from './require-outward'

/** Changes a hook. Switched off it is told nothing, and what waits for it is given up. */
export async function changeWebHook(deps: Deps, { id, ...input }: { id: string } & z.output<typeof changeWebHookBody>): Promise<WebHookOut> {
  if (input.url !== undefined) await requireOutward(input.url, 'url', webHookPolicy())
  await deps.db.transaction(async (tx) => {
    const { name, url, events, enabled } = await lockWebHook({ db: tx }, id)
    const change = difference<{ name: string, url: string, events: string[], enabled: boolean }>({ name, url, events, enabled }, input)
    if (!change) return
    await tx.update(webHooks).set(change.after).where(eq(webHooks.id, id))
    await recordAudit({ ...deps, db: tx }, { action: 'web-hook.change', entityKind: 'web-hook', entityId: id, ...change })
  })
  return getWebHook(deps, id)
}
