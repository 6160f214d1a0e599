import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import { nameSchema } from '#shared/schemas/common'
import type { SpacecraftOut, createSpacecraftBody } from '#shared/schemas/spacecraft'
import { catalogueNumberSchema, designatorSchema } from '#shared/schemas/spacecraft'
import type { Db } from '~~/server/database/client'
import { elementSets, spacecraft } from '~~/server/database/schema'
import { recordAudit } from '../audit'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { adoptElementSet, adoptElementSets } from './adopt-element-sets'
import { getSpacecraft } from './read-spacecraft'
import { refuseDuplicates } from './refuse-duplicates'

/**
 * Creates a spacecraft. From a held set: name, number and designator that are not given are the set's; the set, and
 * every other unclaimed set of the number, then waits for this spacecraft.
 */
export async function createSpacecraft(deps: Deps, input: z.output<typeof createSpacecraftBody>): Promise<SpacecraftOut> {
  const id = await refuseDuplicates(() => deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const { fromElementSetId, ...given } = input
    const set = fromElementSetId === undefined ? null : await lockUnclaimedSet(tx, fromElementSetId)
    const values = {
      ...given,
      name: given.name ?? nameFrom(set?.name ?? null),
      catalogueNumber: given.catalogueNumber ?? orNull(catalogueNumberSchema, set?.catalogueNumber),
      designator: given.designator ?? orNull(designatorSchema, set?.designator),
    }
    const [row] = await tx.insert(spacecraft).values({ ...values, createdAt: deps.now }).returning({ id: spacecraft.id })
    await recordAudit(inner, { action: 'spacecraft.create', entityKind: 'spacecraft', entityId: row!.id, after: { ...values, ...(set ? { fromElementSetId: set.id } : {}) } })
    if (set) await adoptElementSet(inner, row!.id, set.id)
    if (values.catalogueNumber !== null) await adoptElementSets(inner, row!.id, values.catalogueNumber)
    return row!.id
  }))
  return getSpacecraft(deps, id)
}

async function lockUnclaimedSet(tx: Db, id: string) {
  const [set] = await tx.select({ id: elementSets.id, spacecraftId: elementSets.spacecraftId, state: elementSets.state, name: elementSets.name, catalogueNumber: elementSets.catalogueNumber, designator: elementSets.designator })
    .from(elementSets).where(eq(elementSets.id, id)).for('update')
  if (!set) throw new DomainError('not-valid', 'fromElementSetId: There is no such element set.', [{ path: 'fromElementSetId', message: 'There is no such element set.' }])
  if (set.spacecraftId !== null) throw new DomainError('conflict', 'This element set belongs to a spacecraft already: open that one.')
  if (set.state !== 'waiting') throw new DomainError('conflict', `This element set is ${set.state}, not waiting: take another.`)
  return set
}

function nameFrom(setName: string | null): string {
  const name = nameSchema.safeParse(setName)
  if (name.success) return name.data
  const message = 'The element set bears no usable name: give one.'
  throw new DomainError('not-valid', `name: ${message}`, [{ path: 'name', message }])
}

function orNull(schema: z.ZodType<string>, text: string | null | undefined): string | null {
  const result = schema.safeParse(text)
  return result.success ? result.data : null
}
