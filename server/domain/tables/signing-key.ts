import { calculateJwkThumbprint, exportJWK, generateKeyPair } from 'jose'
import { eq } from 'drizzle-orm'
import { signingKeys } from '~~/server/database/schema'
import type { Deps } from '../context'

export interface SigningKey { kid: string, publicJwk: Record<string, string>, privateJwk: Record<string, string> }

/** The installation's signing key (Ed25519), made when it is first needed. Several servers get the same one. */
export async function ensureSigningKey({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<SigningKey> {
  const active = await activeKey({ db })
  if (active) return active
  await db.insert(signingKeys).values({ ...await makeSigningKey(), createdAt: now }).onConflictDoNothing()
  return (await activeKey({ db }))!
}

/** A new pair; its id is the RFC 7638 thumbprint. */
export async function makeSigningKey(): Promise<SigningKey> {
  const { publicKey, privateKey } = await generateKeyPair('EdDSA', { crv: 'Ed25519', extractable: true })
  const publicJwk = await exportJWK(publicKey) as Record<string, string>
  const privateJwk = await exportJWK(privateKey) as Record<string, string>
  return { kid: await calculateJwkThumbprint(publicJwk), publicJwk, privateJwk }
}

async function activeKey({ db }: Pick<Deps, 'db'>): Promise<SigningKey | null> {
  const [row] = await db.select({ kid: signingKeys.kid, publicJwk: signingKeys.publicJwk, privateJwk: signingKeys.privateJwk }).from(signingKeys).where(eq(signingKeys.active, true))
  return row ?? null
}
