import { sql } from 'drizzle-orm'
import type { Deps } from '../context'
import type { Cause } from './cause'

interface Row extends Record<string, unknown> { id: string, name: string, failed: number, error: string | null }

/** Web hooks of which a message was given up, and none got through since. A hook that is switched off fails nobody. */
export async function findWebHookFailing({ db }: Pick<Deps, 'db' | 'now'>): Promise<Cause[]> {
  const { rows } = await db.execute<Row>(sql`
    SELECT h.id, h.name, count(*)::int AS failed, (array_agg(d.last_error ORDER BY d.tried_at DESC))[1] AS error
    FROM web_hooks h JOIN web_hook_deliveries d ON d.hook_id = h.id AND d.state = 'failed' AND d.tried_at IS NOT NULL
    WHERE h.enabled AND h.retired_at IS NULL
      AND d.tried_at > coalesce((SELECT max(o.tried_at) FROM web_hook_deliveries o WHERE o.hook_id = h.id AND o.state = 'delivered'), '-infinity')
    GROUP BY h.id, h.name`)
  return rows.map(row => ({
    kind: 'web-hook-failing',
    cause: `web-hook-failing:${row.id}`,
    severity: 'notice',
    title: `The web hook ${row.name} is not reached`,
    detail: `${row.failed === 1 ? 'A message was' : `${row.failed} messages were`} given up after all tries. The last answer: ${(row.error ?? 'none').slice(0, 300)}`,
    action: 'Open Settings, Web hooks: mend the receiver or the address, send a test, then repeat what it missed. If nobody wants it any more, switch it off.',
    count: row.failed,
    weight: 1,
    raises: true,
  }))
}
