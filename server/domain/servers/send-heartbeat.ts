import { sql } from 'drizzle-orm'
import { settings } from '~~/server/database/schema'
import type { OutwardOptions } from '~~/server/outward/call-outward'
import { callOutward } from '~~/server/outward/call-outward'
import type { Deps } from '../context'
import { readSettings } from '../settings/read-settings'

/** The schedule wakes every few seconds; if it has not for this long, not all is well. */
export const wokeWithinMs = 60_000

/**
 * Calls the address that watches over this server's silence. It calls only while all is well: the schedule has woken
 * within a minute, and the database has just answered. So whoever waits there notices whatever it is that fails.
 * @returns whether a call was answered with 2xx; null where none was made
 */
export async function sendHeartbeat({ db, now }: Pick<Deps, 'db' | 'now'>, { wokeMsAgo, outward }: { wokeMsAgo: number, outward: OutwardOptions }): Promise<boolean | null> {
  const { heartbeatUrl } = await readSettings(db)
  if (heartbeatUrl === null || wokeMsAgo > wokeWithinMs) return null
  const { ok, detail } = await call(heartbeatUrl, outward)
  const value = sql`${JSON.stringify({ at: now.toISOString(), ok, detail })}::jsonb`
  await db.insert(settings).values({ key: 'heartbeatLast', value, updatedAt: now }).onConflictDoUpdate({ target: settings.key, set: { value, updatedAt: now } })
  return ok
}

async function call(url: string, outward: OutwardOptions): Promise<{ ok: boolean, detail: string }> {
  try {
    const { status } = await callOutward({ url, method: 'GET' }, outward)
    return { ok: status >= 200 && status < 300, detail: `Answered ${status}.` }
  }
  catch (error) {
    return { ok: false, detail: (error instanceof Error ? error.message || error.name : String(error)).replaceAll('\u0000', '').slice(0, 300) }
  }
}
