import { createHash } from 'node:crypto'
import { FlattenedSign, importJWK } from 'jose'
import type { PublishedTable } from '#shared/formats/published-table'
import { canonicalTableBytes } from '#shared/formats/published-table'
import type { SigningKey } from './signing-key'

export interface SignedTable {
  /** Canonical JSON (RFC 8785). */
  canonical: string
  /** SHA-256 of its bytes, hexadecimal. */
  digest: string
  /** Detached JWS (RFC 7515 appendix F): header and signature, the payload between the dots left out. */
  signature: string
}

/** The header of what a key signs, as it stands at the beginning of a signature (RFC 7515, section 3.1). */
export const protectedHeader = (kid: string) => Buffer.from(JSON.stringify(headerOf(kid))).toString('base64url')
const headerOf = (kid: string) => ({ alg: 'EdDSA', kid })

export async function signTable(table: PublishedTable, key: SigningKey): Promise<SignedTable> {
  const bytes = canonicalTableBytes(table)
  const { protected: header, signature } = await new FlattenedSign(bytes)
    .setProtectedHeader(headerOf(key.kid))
    .sign(await importJWK(key.privateJwk, 'EdDSA'))
  return {
    canonical: new TextDecoder().decode(bytes),
    digest: createHash('sha256').update(bytes).digest('hex'),
    signature: `${header}..${signature}`,
  }
}
