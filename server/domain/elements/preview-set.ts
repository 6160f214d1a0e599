import { and, asc, eq, isNull } from 'drizzle-orm'
import type { PreviewOut } from '#shared/schemas/elements'
import { stateAfterRecomputation, supersedeShare } from '#shared/table-life'
import { links, stations } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import type { PreviewedPass, PreviewedTable } from '~~/server/workers/tasks/preview-station'
import type { Deps } from '../context'
import type { PairInputs } from '../prediction/load-inputs'
import { loadInputs } from '../prediction/load-inputs'
import type { KnownPass, KnownTable } from '../prediction/load-known'
import { loadKnown } from '../prediction/load-known'
import { windowStart, workerInputOf } from '../prediction/worker-input'
import { effectsOfSet } from './effects-of-set'
import { findSet, requireSpacecraft } from './use-element-set'

/** Drafts further ahead are computed anew long before anybody decides on them. */
const DRAFTS_AHEAD_MS = 48 * 3_600_000

/** What one station contributes. */
type Part = Pick<PreviewOut, 'published' | 'drafts' | 'looked'>

/**
 * What would become of tables if this set were put into use now: predicted as it would be, station by station, and held
 * against what is known, with nothing written: all that is published, and drafts of the next 48 h. For a set that is or was in use: what it did.
 */
export async function previewSet({ db, now }: Pick<Deps, 'db' | 'now'>, { id, asOf }: { id: string, asOf?: PreviewOut['asOf'] }): Promise<PreviewOut> {
  const set = await findSet(db, id)
  const was = set.state === 'in-use' || set.state === 'past'
  if ((asOf ?? (was ? 'after' : 'before')) === 'after') return effectsOfSet({ db }, { id })
  const spacecraftId = requireSpacecraft(set)
  const rows = await db.select({ id: stations.id }).from(stations).where(isNull(stations.retiredAt)).orderBy(asc(stations.name), asc(stations.id))
  // What was made for links that are retired is none of this set's doing.
  const linkNames = new Map((await db.select({ id: links.id, name: links.name }).from(links).where(and(eq(links.spacecraftId, spacecraftId), isNull(links.retiredAt)))).map(link => [link.id, link.name]))
  const parts = await Promise.all(rows.map(async (station) => {
    const pair = { spacecraftId, stationId: station.id }
    const inputs = await loadInputs({ db, now }, pair, id)
    const known = await loadKnown({ db }, pair, windowStart(now))
    const ahead = known.filter(pass => pass.aos > now)
    const draftsUntil = new Date(now.getTime() + DRAFTS_AHEAD_MS)
    const given = { inputs, linkNames, known: ahead, draftsUntil }
    if (!inputs.set || inputs.stopped) return partOf(given, [])
    return partOf(given, await runTask('preview-station', { ...workerInputOf({ ...inputs, set: inputs.set }, known, now), draftsUntilMs: draftsUntil.getTime() }))
  }))
  const byAos = (a: { aos: string }, b: { aos: string }) => a.aos < b.aos ? -1 : 1
  const sum = (of: (part: Part) => number) => parts.reduce((total, part) => total + of(part), 0)
  return {
    setId: id,
    asOf: 'before',
    published: parts.flatMap(part => part.published).sort(byAos),
    drafts: parts.flatMap(part => part.drafts).sort(byAos),
    looked: { published: sum(p => p.looked.published), drafts: sum(p => p.looked.drafts), passesGone: sum(p => p.looked.passesGone), passesNew: sum(p => p.looked.passesNew) },
  }
}

interface Given { readonly inputs: PairInputs, readonly linkNames: ReadonlyMap<string, string>, readonly known: readonly KnownPass[], readonly draftsUntil: Date }

function partOf(given: Given, predicted: readonly PreviewedPass[]): Part {
  const part: Part = { published: [], drafts: [], looked: { published: 0, drafts: 0, passesGone: 0, passesNew: predicted.filter(pass => !pass.knownId && !pass.untouched).length } }
  for (const pass of given.known) {
    const now = predicted.find(candidate => candidate.knownId === pass.id)
    if (now?.untouched || (!now && pass.gone)) continue
    if (!now) part.looked.passesGone++
    for (const table of pass.tables) lookAt(part, given, pass, table, now?.tables.find(({ linkId }) => linkId === table.linkId) ?? null, now !== undefined)
  }
  return part
}

function lookAt(part: Part, { inputs, linkNames, draftsUntil }: Given, pass: KnownPass, table: KnownTable, predicted: PreviewedTable | null, isPredicted: boolean): void {
  const linkName = linkNames.get(table.linkId)
  if (linkName === undefined) return
  const named = { tableId: table.id, passId: pass.id, stationName: inputs.station.name, linkName, aos: pass.aos.toISOString() }
  const gone = whyGone(inputs, table, predicted, isPredicted)
  const { out, open } = table
  if (out) {
    part.looked.published++
    const recheck = predicted?.recheck ?? null
    const movesByHz = recheck && Math.abs(recheck.worstResidualHz - out.worstResidualHz)
    if (gone || recheck) {
      part.published.push({
        ...named, revision: out.number, verdictBefore: out.verdict, verdictAfter: recheck?.verdict ?? null, gone,
        supersedes: recheck?.moved ?? false, movesByHz, limitHz: recheck && supersedeShare * recheck.allowanceHz, reason: null,
      })
    }
  }
  if (open && pass.aos <= draftsUntil) {
    part.looked.drafts++
    const after = predicted?.planned?.verdict ?? null
    if (gone || (after && after !== open.verdict)) {
      const state = open.state as 'drafted' | 'approved' | 'held'
      part.drafts.push({ ...named, revision: open.number, verdictBefore: open.verdict, verdictAfter: after, gone, state, returnsToDraft: after !== null && stateAfterRecomputation(state, open.verdict, after) !== state })
    }
  }
}

function whyGone(inputs: PairInputs, table: KnownTable, predicted: PreviewedTable | null, isPredicted: boolean): string | null {
  if (!isPredicted) return 'The pass is no longer predicted.'
  if (predicted?.kind === 'not-workable') return 'The pass no longer rises above the link’s minimum elevation.'
  return inputs.unserved.get(table.linkId) ?? null
}
