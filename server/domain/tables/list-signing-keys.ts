import { desc, sql } from 'drizzle-orm'
import { signingKeys } from '~~/server/database/schema'
import type { Deps } from '../context'
import { protectedHeader } from './sign-table'

/** How long stations are given the public half of a key after the last table that it signed. */
const servedForDays = 90
export const servedSince = (now: Date) => new Date(now.getTime() - servedForDays * 86_400_000)

/** All signing keys without their private halves, the one that signs now first. */
export function listSigningKeys({ db }: Pick<Deps, 'db'>) {
  const { kid, publicJwk, active, createdAt, retiredAt } = signingKeys
  return db.select({ kid, publicJwk, createdAt, retiredAt }).from(signingKeys).orderBy(desc(active), desc(createdAt), kid)
}

/** When the newest revision came out that a key has signed, none before `since`: a signature begins with the header that names its key. */
export async function lastSignature({ db }: Pick<Deps, 'db'>, kid: string, since: Date): Promise<Date | null> {
  const { rows } = await db.execute<{ at: string | null }>(sql`
    SELECT max(published_at) AS at FROM table_revisions WHERE published_at >= ${since.toISOString()}::timestamptz AND starts_with(signature, ${`${protectedHeader(kid)}..`})`)
  const at = rows[0]?.at ?? null
  return at === null ? null : new Date(at)
}
