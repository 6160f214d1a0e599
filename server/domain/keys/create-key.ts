import { createHash, randomInt } from 'node:crypto'
import { and, eq, isNull } from 'drizzle-orm'
import type { z } from 'zod'
import type { createKeyBody, keyCreated } from '#shared/schemas/people'
import { apiKeys, stations } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import { keyPrefixLength } from '../auth/find-key'
import { requireReferred } from '../catalogue/require-row'
import type { Deps } from '../context'
import { personId } from '../context'
import { DomainError } from '../errors'
import { getKey } from './read-keys'

/** Two, so that a station can change over from the old one to the new one. */
const keysPerStation = 2
const signs = 'ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789'
/** Each sign equally likely: randomInt draws again instead of folding a byte. */
const randomText = (length: number) => Array.from({ length }, () => signs[randomInt(signs.length)]).join('')

/** Makes a key and gives it in the clear, this once; only its SHA-256 is kept. */
export async function createKey(deps: Deps, input: z.output<typeof createKeyBody>): Promise<z.infer<typeof keyCreated>> {
  const key = `nb_${randomText(8)}${randomText(32)}`
  const id = await deps.db.transaction(async (tx) => {
    if (input.stationId !== null) {
      const [station] = await tx.select().from(stations).where(eq(stations.id, input.stationId)).for('update')
      requireReferred(station, 'stationId', 'station')
      const active = await tx.$count(apiKeys, and(eq(apiKeys.stationId, input.stationId), isNull(apiKeys.revokedAt)))
      if (active >= keysPerStation) throw new DomainError('conflict', `${station!.name} has ${keysPerStation} keys: revoke one first.`)
    }
    const values = { ...input, prefix: key.slice(0, keyPrefixLength) }
    const [row] = await tx.insert(apiKeys).values({ ...values, keyHash: createHash('sha256').update(key).digest('hex'), createdById: personId(deps.actor), createdAt: deps.now }).returning({ id: apiKeys.id })
    await recordAudit({ ...deps, db: tx }, { action: 'key.create', entityKind: 'key', entityId: row!.id, after: values })
    return row!.id
  })
  return { ...await getKey(deps, id), key }
}
