import { desc } from 'drizzle-orm'
import type { z } from 'zod'
import type { jwkSetOut } from '#shared/schemas/station-feed'
import { signingKeys } from '~~/server/database/schema'
import type { Deps } from '../context'

/** The public halves of all signing keys, past ones too, as a JWK Set (RFC 7517, RFC 8037). */
export async function readKeys({ db }: Pick<Deps, 'db'>): Promise<z.infer<typeof jwkSetOut>> {
  const rows = await db.select({ kid: signingKeys.kid, publicJwk: signingKeys.publicJwk }).from(signingKeys).orderBy(desc(signingKeys.createdAt))
  return { keys: rows.map(({ kid, publicJwk: { kty, crv, x } }) => ({ kty: kty!, crv: crv!, x: x!, kid, alg: 'EdDSA', use: 'sig' })) }
}
