import type { z } from 'zod'
import type { signingKeyOut } from '#shared/schemas/station-feed'
import type { Deps } from '../context'
import { lastSignature, listSigningKeys, servedSince } from './list-signing-keys'

export type SigningKeyOut = z.infer<typeof signingKeyOut>

/** All keys that ever signed (some dozens at most), each with whether stations are still given it and what it signed last. */
export async function showSigningKeys({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<{ items: SigningKeyOut[], nextCursor: null }> {
  const keys = await listSigningKeys({ db })
  const items = await Promise.all(keys.map(async ({ kid, createdAt, retiredAt }) => {
    const last = await lastSignature({ db }, kid, servedSince(now))
    return { kid, createdAt: createdAt.toISOString(), retiredAt: retiredAt?.toISOString() ?? null, lastSignedAt: last?.toISOString() ?? null, served: retiredAt === null || last !== null }
  }))
  return { items, nextCursor: null }
}
