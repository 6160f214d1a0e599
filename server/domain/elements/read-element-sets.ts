import { and, desc, eq, isNull, isNotNull, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { ElementSetOut, elementSetsQuery } from '#shared/schemas/elements'
import type { Db } from '~~/server/database/client'
import { audit, elementSets, elementUploads, spacecraft } from '~~/server/database/schema'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'
import { DomainError } from '../errors'
import { apsidesKm } from './apsides'
import { ruleDeclines } from './trail-words'
import { isFound, isHandled, isOfUpload } from './unassigned-sets'

/** Why the rule of its spacecraft, as it stands, has left a waiting set to people. */
const ruleDeclined = sql<string | null>`CASE WHEN ${elementSets.state} = 'waiting' AND ${spacecraft.autoUse} IS NOT NULL THEN (
  SELECT declined.reason FROM ${audit} AS declined
  WHERE declined.entity_kind = 'element-set' AND declined.entity_id = ${elementSets.id}::text AND declined.action = ${ruleDeclines} AND declined.after -> 'rule' = ${spacecraft.autoUse}
  ORDER BY declined.id DESC LIMIT 1) END`

const select = (db: Pick<Db, 'select'>) => db.select({ set: elementSets, spacecraftName: spacecraft.name, uploadedAt: elementUploads.createdAt, uploadedBy: elementUploads.by, ruleDeclined })
  .from(elementSets)
  .innerJoin(elementUploads, eq(elementUploads.id, elementSets.uploadId))
  .leftJoin(spacecraft, eq(spacecraft.id, elementSets.spacecraftId))
  .$dynamic()
type Row = Awaited<ReturnType<typeof select>>[number]

function toOut({ set, spacecraftName, uploadedAt, uploadedBy, ruleDeclined }: Row, now: Date): ElementSetOut {
  const { id, uploadId, spacecraftId, state, name, catalogueNumber, designator, epochUtcUs, sha256, originalText, warnings, decidedBy, reason } = set
  const { inclinationDeg, eccentricity, meanMotionRevPerDay, bstar } = set.elements
  return {
    id, uploadId, spacecraftId, spacecraftName, state, name, catalogueNumber, designator,
    epoch: set.epoch.toISOString(), epochUtcUs,
    ageHours: (now.getTime() - epochUtcUs / 1000) / 3_600_000,
    ...apsidesKm(set.elements),
    inclinationDeg, eccentricity, meanMotionRevPerDay, bstar,
    sha256, originalText, warnings,
    uploadedAt: uploadedAt.toISOString(), uploadedBy,
    decidedAt: set.decidedAt?.toISOString() ?? null, decidedBy, reason,
    useAt: set.useAt?.toISOString() ?? null, useScheduledBy: set.useScheduledBy, ruleDeclined,
  }
}

/** Element sets, newest epoch first. */
export async function listElementSets({ db, now }: Pick<Deps, 'db' | 'now'>, query: z.output<typeof elementSetsQuery>) {
  const after = readCursor(query.cursor, z.tuple([cursorInstant, z.uuid()]))
  const rows = await select(db)
    .where(and(
      query.spacecraftId ? eq(elementSets.spacecraftId, query.spacecraftId) : undefined,
      query.state ? eq(elementSets.state, query.state) : undefined,
      query.unassigned === 'true' ? isNull(elementSets.spacecraftId) : query.unassigned === 'false' ? isNotNull(elementSets.spacecraftId) : undefined,
      query.handling ? isHandled(query.handling) : undefined,
      query.uploadId ? isOfUpload(db, query.uploadId) : undefined,
      query.q ? isFound(query.q) : undefined,
      after ? sql`(${elementSets.epoch}, ${elementSets.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined,
    ))
    .orderBy(desc(elementSets.epoch), desc(elementSets.id)).limit(query.limit + 1)
  const page = toPage(rows, query.limit, ({ set }) => [set.epoch.toISOString(), set.id])
  return { items: page.rows.map(row => toOut(row, now)), nextCursor: page.nextCursor }
}

export async function getElementSet({ db, now }: Pick<Deps, 'db' | 'now'>, id: string): Promise<ElementSetOut> {
  const [row] = await select(db).where(eq(elementSets.id, id))
  if (!row) throw new DomainError('not-found', 'There is no element set under this address.')
  return toOut(row, now)
}
