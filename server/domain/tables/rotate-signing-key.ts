import { eq, sql } from 'drizzle-orm'
import { signingKeys } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import type { SigningKeyOut } from './show-signing-keys'
import { makeSigningKey } from './signing-key'

/**
 * Makes a new signing key, which signs from the next publication on. The one before signs no more, but what it signed
 * still verifies: stations get its public half until 90 days after the last table that it signed.
 */
export async function rotateSigningKey(deps: Deps): Promise<SigningKeyOut> {
  const made = await makeSigningKey()
  await deps.db.transaction(async (tx) => {
    // Two who make one at once take turns; the later one's signs.
    await tx.execute(sql`SELECT pg_advisory_xact_lock(hashtext('signing-key'))`)
    const retired = await tx.update(signingKeys).set({ active: false, retiredAt: deps.now }).where(eq(signingKeys.active, true)).returning({ kid: signingKeys.kid })
    await tx.insert(signingKeys).values({ ...made, createdAt: deps.now })
    await recordAudit({ ...deps, db: tx }, { action: 'signing-key.make', entityKind: 'signing-key', entityId: made.kid, before: { kid: retired[0]?.kid ?? null }, after: { kid: made.kid } })
  })
  return { kid: made.kid, createdAt: deps.now.toISOString(), retiredAt: null, lastSignedAt: null, served: true }
}
