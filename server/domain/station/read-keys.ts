import type { z } from 'zod'
import type { jwkSetOut } from '#shared/schemas/station-feed'
import type { Deps } from '../context'
import { lastSignature, listSigningKeys, servedSince } from '../tables/list-signing-keys'

/** The public keys that tables published in the last 90 days verify with, the one that signs now first, as a JWK Set (RFC 7517, RFC 8037). */
export async function readKeys({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<z.infer<typeof jwkSetOut>> {
  const since = servedSince(now)
  const keys: z.infer<typeof jwkSetOut>['keys'] = []
  for (const { kid, publicJwk: { kty, crv, x }, retiredAt } of await listSigningKeys({ db })) {
    // One that was retired before signed nothing since: its signatures need no search.
    if (retiredAt && (retiredAt < since || !(await lastSignature({ db }, kid, since)))) continue
    keys.push({ kty: kty!, crv: crv!, x: x!, kid, alg: 'EdDSA', use: 'sig' })
  }
  return { keys }
}
