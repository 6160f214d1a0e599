import { asc, eq, sql } from 'drizzle-orm'
import type { PublishedTable } from '#shared/formats/published-table'
import type { TableOut } from '#shared/schemas/tables'
import type { StoredCheck } from '~~/server/database/schema'
import { audit, elementSets, links, radios, tableRevisions, tables } from '~~/server/database/schema'
import type { Deps } from '../context'
import { readSettings } from '../settings/read-settings'
import { isoMicroseconds, publishedRadio } from './published-table-of'
import { getBrief } from './table-brief'

/** A tuning table with its newest revision whole, its other revisions in brief, and its history from the trail. */
export async function getTable({ db, now }: Pick<Deps, 'db' | 'now'>, id: string): Promise<TableOut> {
  const brief = await getBrief({ db, now }, id)
  const [row] = await db.select({ revision: tableRevisions, radio: radios, set: { id: elementSets.id, epochUtcUs: elementSets.epochUtcUs, sha256: elementSets.sha256 }, link: links }).from(tableRevisions)
    .innerJoin(tables, eq(tables.id, tableRevisions.tableId))
    .innerJoin(radios, eq(radios.id, tableRevisions.radioId))
    .innerJoin(elementSets, eq(elementSets.id, tableRevisions.elementSetId))
    .innerJoin(links, eq(links.id, tables.linkId))
    .where(sql`${tableRevisions.tableId} = ${id} AND ${tableRevisions.number} = ${brief.revision}`)
  const { revision, radio, set, link } = row!
  const { limitedBy, budget, symbolClockPpm, excess, faults, workable } = revision.check
  // What has gone out stays as it went out, whatever has become of radio and link since.
  const published = revision.canonical === null ? null : JSON.parse(revision.canonical) as PublishedTable
  const { ramp = null, converter = null, ...facts } = published?.radio ?? publishedRadio(radio)
  return {
    ...brief,
    limitedBy, budget, symbolClockPpm, excess, faults, workable,
    k: kOf(revision.check) ?? (await readSettings(db)).k,
    radio: { ...facts, ramp, converter },
    elementSet: { id: set.id, epoch: isoMicroseconds(set.epochUtcUs), sha256: set.sha256 },
    symbolRateHz: published?.link.symbolRateHz ?? link.symbolRateHz,
    bandLowHz: published?.link.bandLowHz ?? link.bandLowHz,
    bandHighHz: published?.link.bandHighHz ?? link.bandHighHz,
    digest: revision.digest,
    retunes: revision.retunes,
    history: await historyOf({ db }, id),
    revisions: await revisionsOf({ db }, id),
  }
}

/** How many times the spreads were counted, from the budget itself; null where there is no spread to count. */
function kOf({ worstResidualHz, budget }: Pick<StoredCheck, 'worstResidualHz' | 'budget'>): number | null {
  const spreadHz = Math.hypot(budget.orbitHz, budget.oscillatorHz, budget.trimHz)
  if (spreadHz === 0) return null
  return Math.round((worstResidualHz - Math.abs(budget.stepsHz) - budget.timingHz - budget.ut1Hz) / spreadHz * 1e6) / 1e6
}

async function historyOf({ db }: Pick<Deps, 'db'>, id: string): Promise<TableOut['history']> {
  const rows = await db.select({ at: audit.at, action: audit.action, by: audit.actorName, reason: audit.reason, after: audit.after }).from(audit).where(eq(audit.tableId, id)).orderBy(asc(audit.id))
  return rows.map(({ at, after, ...row }) => {
    const revision = (after as { revision?: unknown } | null)?.revision
    return { ...row, at: at.toISOString(), revision: typeof revision === 'number' ? revision : null }
  })
}

async function revisionsOf({ db }: Pick<Deps, 'db'>, id: string): Promise<TableOut['revisions']> {
  const r = tableRevisions
  const rows = await db.select({
    revision: r.number, state: r.state, verdict: r.verdict, worstResidualHz: sql<number>`(${r.check} ->> 'worstResidualHz')::double precision`, publishedAt: r.publishedAt, reason: r.reason,
  }).from(r).where(eq(r.tableId, id)).orderBy(asc(r.number))
  return rows.map(row => ({ ...row, publishedAt: row.publishedAt?.toISOString() ?? null }))
}
