import { and, desc, eq, isNotNull, isNull, sql } from 'drizzle-orm'
import { priorFor } from '#shared/physics/accuracy/prior'
import { elementSets, manoeuvres, spacecraft } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import type { Misfit } from '~~/server/workers/tasks/fit-sets'
import { spreadM } from '~~/server/workers/tasks/fit-sets'
import { jsonBytes } from '~~/server/workers/tasks/batch'
import type { Deps } from '../context'
import { learnedAccuracy } from '../prediction/learned-accuracy'
import { alongTrackOf } from '../prediction/models'
import { readSettings } from '../settings/read-settings'
import { storableText } from './storable-text'

/** A whole catalogue is not looked through for what may be ours. */
const foreignAtMost = 2000
const ownAtMost = 10_000

/**
 * Warns of each set that an upload has brought and that fits another spacecraft far better than the one it was taken for,
 * or fits one although it was taken for none. Called inside the transaction that stores the upload.
 */
export async function pointOutMisfits(deps: Pick<Deps, 'db'>, uploadId: string): Promise<void> {
  const { db } = deps
  const rows = await db.select({ craft: spacecraft, elements: elementSets.elements }).from(spacecraft).innerJoin(elementSets, eq(elementSets.id, spacecraft.inUseSetId)).where(isNull(spacecraft.retiredAt))
  if (rows.length === 0) return
  const settings = await readSettings(db)
  const burns = await db.select().from(manoeuvres).where(isNull(manoeuvres.cancelledAt))
  const burnsOf = (craftId: string) => burns.filter(burn => burn.spacecraftId === craftId)
  const brought = eq(elementSets.uploadId, uploadId)
  const columns = { id: elementSets.id, name: elementSets.name, line: elementSets.lineNumber, spacecraftId: elementSets.spacecraftId, elements: elementSets.elements }
  const sets = await db.select(columns).from(elementSets).where(and(brought, isNotNull(elementSets.spacecraftId))).orderBy(desc(elementSets.epoch)).limit(ownAtMost)
  const foreign = await db.select(columns).from(elementSets).where(and(brought, isNull(elementSets.spacecraftId))).limit(foreignAtMost + 1)
  if (foreign.length <= foreignAtMost) sets.push(...foreign)
  if (sets.length === 0) return
  // By the prior first: what a spacecraft's own sets have taught is asked only where it decides.
  const fleet = rows.map(({ craft, elements }) => ({ id: craft.id, elements, accuracy: alongTrackOf(craft, elements, priorFor(elements, settings.prior), burnsOf(craft.id)) }))
  const found = await runTask('fit-sets', { fleet, sets: sets.map(({ id, spacecraftId, elements }) => ({ id, spacecraftId, elements })) })
  const notes: { id: string, note: { line: number, name?: string, code: string, message: string } }[] = []
  for (const misfit of found) {
    const set = sets.find(set => set.id === misfit.setId)!
    const [own, better] = [rows.find(({ craft }) => craft.id === set.spacecraftId), rows.find(({ craft }) => craft.id === misfit.betterId)!]
    if (own && misfit.ownM !== null) {
      const learned = await learnedAccuracy({ db }, { spacecraftId: own.craft.id, elements: own.elements, settings })
      if (misfit.ownM <= spreadM(alongTrackOf(own.craft, own.elements, learned, burnsOf(own.craft.id)), set.elements.epochUtcUs / 1000)) continue
    }
    notes.push({ id: set.id, note: { line: set.line, ...(set.name === null ? {} : { name: set.name }), code: 'fits-another', message: storableText(messageOf(misfit, own?.craft.name ?? null, better.craft.name)) } })
  }
  if (notes.length > 0) await tell(deps, uploadId, notes)
}

const km = (m: number) => (m / 1000).toFixed(m < 100_000 ? 1 : 0)

function messageOf({ ownM, betterM }: Misfit, own: string | null, better: string): string {
  const near = `${km(betterM)} km from where ${better} is predicted`
  return own === null || ownM === null
    ? `It was taken for no spacecraft, but over one revolution it lies ${near}. If it is that one, give it to ${better}.`
    : `Over one revolution it lies ${km(ownM)} km from where ${own} is predicted, but ${near}. Check whose it is, and give it to ${better} if it is that one.`
}

async function tell({ db }: Pick<Deps, 'db'>, uploadId: string, notes: readonly { id: string, note: object }[]): Promise<void> {
  await db.execute(sql`
    WITH found AS MATERIALIZED (SELECT * FROM json_to_recordset(${Buffer.from(jsonBytes(notes))}::json) AS r(id uuid, note jsonb)), told AS (
      INSERT INTO element_upload_notes (upload_id, kind, line, name, code, message)
      SELECT ${uploadId}::uuid, 'warning', w.line, w.name, w.code, w.message FROM found, jsonb_to_record(found.note) AS w(line integer, name text, code text, message text)
    )
    UPDATE element_sets AS held SET warnings = held.warnings || jsonb_build_array(found.note) FROM found WHERE held.id = found.id`)
}
