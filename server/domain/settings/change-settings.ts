import { sql } from 'drizzle-orm'
import type { z } from 'zod'
import type { Settings, changeSettingsBody, settingsOut } from '#shared/schemas/settings'
import { settings } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { difference, touches } from '../difference'
import { heartbeatPolicy } from '~~/server/outward/policy'
import { requestRefresh } from '../prediction/request-refresh'
import { readSettings } from './read-settings'
import { requireOutward } from '../web-hooks/require-outward'
import { settingsOverview } from './settings-overview'

/** What every prediction and table is computed with. */
const predictionSettings = ['horizonDays', 'ut1', 'k', 'prior'] as const

export async function changeSettings(deps: Deps, input: z.output<typeof changeSettingsBody>): Promise<z.infer<typeof settingsOut>> {
  if (input.heartbeatUrl) await requireOutward(input.heartbeatUrl, 'heartbeatUrl', heartbeatPolicy())
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    // Two changes at once take turns, so that the trail's before is what stood.
    await tx.execute(sql`SELECT pg_advisory_xact_lock(hashtext('settings'))`)
    const change = difference<Settings>(await readSettings(tx), input)
    if (!change) return
    for (const [key, value] of Object.entries(change.after)) {
      // The JSON null, not the SQL one: not set is a value too.
      const json = sql`${JSON.stringify(value)}::jsonb`
      await tx.insert(settings).values({ key, value: json, updatedAt: deps.now }).onConflictDoUpdate({ target: settings.key, set: { value: json, updatedAt: deps.now } })
    }
    await recordAudit(inner, { action: 'settings.change', entityKind: 'settings', entityId: 'settings', ...change })
    if (touches(change, predictionSettings)) await requestRefresh(inner, { reason: `settings changed: ${Object.keys(change.after).join(', ')}` })
  })
  return settingsOverview(deps)
}
