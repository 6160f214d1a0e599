import { and, asc, eq, gte, inArray, sql } from 'drizzle-orm'
import { canonicalJson } from '#shared/formats/canonical-json'
import { openStates, outStates } from '#shared/table-life'
import type { StoredRetune } from '~~/server/database/schema'
import { passes, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { PairIds } from './load-inputs'

type RevisionRow = typeof tableRevisions.$inferSelect

export type KnownRevision = Pick<RevisionRow, 'id' | 'tableId' | 'number' | 'state' | 'verdict' | 'radioId' | 'elementSetId' | 'inputsDigest' | 'reason'
  | 'approvedById' | 'approvedBy' | 'approvedAt' | 'secondedById' | 'secondedBy'> & {
    readonly worstResidualHz: number
    readonly allowanceHz: number
    /** Of revisions that are out only. */
    readonly retunes: StoredRetune[] | null
  }

export interface KnownTable {
  readonly id: string
  readonly linkId: string
  readonly open: KnownRevision | null
  readonly out: KnownRevision | null
  readonly last: KnownRevision | null
  /** The revision before the one that is open was withdrawn: a person took it back. */
  readonly takenBack: boolean
}

export interface KnownPass {
  readonly id: string
  readonly aos: Date
  readonly culmination: Date
  readonly culminationMs: number
  readonly los: Date
  readonly gone: boolean
  readonly tables: readonly KnownTable[]
}

/** Passes of a pair that end after `from`, gone ones too, with their tables and where each of these stands. */
export async function loadKnown({ db }: Pick<Deps, 'db'>, { spacecraftId, stationId }: PairIds, from: Date): Promise<KnownPass[]> {
  const passRows = await db.select().from(passes)
    .where(and(eq(passes.spacecraftId, spacecraftId), eq(passes.stationId, stationId), gte(passes.los, from))).orderBy(asc(passes.culmination), asc(passes.id))
  const tableRows = passRows.length > 0 ? await db.select().from(tables).where(inArray(tables.passId, passRows.map(pass => pass.id))).orderBy(asc(tables.id)) : []
  const revisions = groupBy(await loadRevisions({ db }, tableRows.map(table => table.id)), revision => revision.tableId)
  const tablesOf = groupBy(tableRows, table => table.passId)
  return passRows.map(pass => ({
    id: pass.id,
    aos: pass.aos,
    culmination: pass.culmination,
    culminationMs: pass.culmination.getTime(),
    los: pass.los,
    gone: pass.goneAt !== null,
    tables: (tablesOf.get(pass.id) ?? []).map(({ id, linkId }) => {
      const own = revisions.get(id) ?? []
      return {
        id,
        linkId,
        open: own.find(revision => openStates.includes(revision.state)) ?? null,
        out: own.find(revision => outStates.includes(revision.state)) ?? null,
        last: own.at(-1) ?? null,
        takenBack: own.findLast(revision => !openStates.includes(revision.state))?.state === 'withdrawn',
      }
    }),
  }))
}

function loadRevisions({ db }: Pick<Deps, 'db'>, tableIds: string[]): Promise<KnownRevision[]> {
  if (tableIds.length === 0) return Promise.resolve([])
  const r = tableRevisions
  return db.select({
    id: r.id, tableId: r.tableId, number: r.number, state: r.state, verdict: r.verdict, radioId: r.radioId, elementSetId: r.elementSetId, inputsDigest: r.inputsDigest, reason: r.reason,
    approvedById: r.approvedById, approvedBy: r.approvedBy, approvedAt: r.approvedAt, secondedById: r.secondedById, secondedBy: r.secondedBy,
    worstResidualHz: sql<number>`(${r.check} ->> 'worstResidualHz')::double precision`,
    allowanceHz: sql<number>`(${r.check} ->> 'allowanceHz')::double precision`,
    retunes: sql<StoredRetune[] | null>`CASE WHEN ${r.state} IN ('published','collected') THEN ${r.retunes} END`,
  }).from(r).where(inArray(r.tableId, tableIds)).orderBy(asc(r.tableId), asc(r.number))
}

/** Takes the lock under which the revisions of these tables change; in order of id, so that no two wait for each other. */
export async function lockTables({ db }: Pick<Deps, 'db'>, tableIds: readonly string[]): Promise<void> {
  if (tableIds.length === 0) return
  await db.select({ id: tables.id }).from(tables).where(inArray(tables.id, [...tableIds])).orderBy(asc(tables.id)).for('update')
}

/** Changes whenever another computation or a publication has come between. Decisions that leave the rows alone do not count. */
export function knownFingerprint(known: readonly KnownPass[]): string {
  return canonicalJson(known.map(pass => [
    pass.id, pass.aos.getTime(), pass.culminationMs, pass.gone,
    pass.tables.map(table => [table.id, table.open?.id ?? null, table.open?.inputsDigest ?? null, table.out?.id ?? null, table.last?.id ?? null]),
  ]))
}

function groupBy<T>(rows: readonly T[], keyOf: (row: T) => string): Map<string, T[]> {
  const groups = new Map<string, T[]>()
  for (const row of rows) {
    const group = groups.get(keyOf(row))
    if (group) group.push(row)
    else groups.set(keyOf(row), [row])
  }
  return groups
}
