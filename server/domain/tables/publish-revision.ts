import { eq } from 'drizzle-orm'
import { canMove, needsSecondPerson } from '#shared/table-life'
import { tableRevisions } from '~~/server/database/schema'
import { recordAudits } from '../audit'
import type { Deps } from '../context'
import { loadInputs } from '../prediction/load-inputs'
import { tableDigest } from '../prediction/quiet-spans'
import { requestRefresh } from '../prediction/request-refresh'
import { tableEvent } from '../web-hooks/table-event'
import { tellHooks } from '../web-hooks/tell-hooks'
import type { LockedTable, RevisionRow } from './lock-table'
import { lockTable } from './lock-table'
import { publishedTableOf } from './published-table-of'
import { signTable } from './sign-table'
import { ensureSigningKey } from './signing-key'
import { stateAudit } from './state-audit'

export interface PublishRequest {
  tableId: string
  mover: 'person' | 'schedule'
  /** Publish this revision and no other. */
  revision?: number
}

/**
 * Why a revision did not go out:
 * - `nothing-open`: all of it is out, lapsed or withdrawn; or it is another revision than the one asked for
 * - `not-approved`: drafted or held
 * - `needs-second-person`: it breaks and one person has approved it
 * - `begun`: AOS has passed; nobody publishes
 * - `frozen`: inside the station's freeze time; only a person publishes
 * - `gone`: the pass is no longer predicted
 * - `stale`: what it was made with has changed and the computation is under way
 */
export type Refusal = 'nothing-open' | 'not-approved' | 'needs-second-person' | 'begun' | 'frozen' | 'gone' | 'stale'

export type PublishOutcome =
  | { outcome: 'published', revisionId: string, revision: number, supersedes: number | null }
  | { outcome: Refusal, detail: string }

/**
 * Publishes a table's approved revision: builds what goes out, digests and signs it, and takes the former one's place;
 * all in one transaction with the trail. Of two at once one publishes. The schedule calls it too.
 */
export async function publishRevision({ db, actor, now }: Deps, request: PublishRequest): Promise<PublishOutcome> {
  return db.transaction(async (tx) => {
    const deps = { db: tx, actor, now }
    const table = await lockTable(deps, request.tableId)
    const refusal = refusalOf(table, request, now)
    if (refusal) return refusal
    const open = table.open!
    if (!await isCurrent(deps, table, open)) {
      await requestRefresh(deps, { spacecraftIds: [table.craft.id], stationIds: [table.station.id], reason: 'Computed anew before publication.' })
      return { outcome: 'stale', detail: 'What this table was made with has just changed; it is being computed anew. Try again in a few seconds.' }
    }
    return publish(deps, table, open)
  })
}

function refusalOf({ open, newest, pass, station }: LockedTable, { mover, revision }: PublishRequest, now: Date): PublishOutcome | null {
  if (revision !== undefined && revision !== newest.number) return { outcome: 'nothing-open', detail: `Revision ${newest.number} has taken the place of revision ${revision}: look at it and decide again.` }
  if (!open) return { outcome: 'nothing-open', detail: `Revision ${newest.number} is ${newest.state}: nothing of this table waits to be published.` }
  if (pass.aos <= now) return { outcome: 'begun', detail: `The pass began at ${pass.aos.toISOString()}: nothing can be published any more.` }
  if (pass.goneAt) return { outcome: 'gone', detail: 'This pass is no longer predicted.' }
  if (!canMove(open.state, 'publish', mover)) return { outcome: 'not-approved', detail: `Revision ${open.number} is ${open.state}: ${open.state === 'held' ? 'release and approve' : 'approve'} it first.` }
  if (needsSecondPerson(open.verdict) && open.secondedBy === null) {
    return { outcome: 'needs-second-person', detail: `This table breaks: a second person, another operator than ${open.approvedBy} or whoever is on call, has to approve it before it is published.` }
  }
  const frozenFrom = pass.aos.getTime() - station.freezeMinutes * 60_000
  if (mover === 'schedule' && now.getTime() >= frozenFrom) return { outcome: 'frozen', detail: `Inside the last ${station.freezeMinutes} minutes before AOS only a person publishes.` }
  return null
}

/** Whether the rows are still what the present inputs lead to: a change asks for a computation, which may not have run yet. */
async function isCurrent(deps: Deps, { craft, station, link, pass }: LockedTable, open: RevisionRow): Promise<boolean> {
  const { stopped, served } = await loadInputs(deps, { spacecraftId: craft.id, stationId: station.id })
  const times = { aosMs: pass.aos.getTime(), losMs: pass.los.getTime() }
  return stopped === null && served.some(candidate => candidate.link.id === link.id && tableDigest(candidate, times) === open.inputsDigest)
}

async function publish(deps: Deps, table: LockedTable, open: RevisionRow): Promise<PublishOutcome> {
  const { db, actor, now } = deps
  const { out } = table
  const reason = open.reason ?? `Revision ${open.number} takes its place.`
  const published = await publishedTableOf(deps, table, open, out ? { revision: out.number, reason } : null)
  const signed = await signTable(published, await ensureSigningKey(deps))
  const audits = []
  if (out) {
    await db.update(tableRevisions).set({ state: 'superseded', reason, supersededAt: now, updatedAt: now }).where(eq(tableRevisions.id, out.id))
    audits.push(stateAudit('table.supersede', { tableId: table.id, revisionId: out.id, revision: out.number, from: out.state, to: 'superseded', reason }))
  }
  await db.update(tableRevisions).set({ state: 'published', publishedAt: now, publishedBy: actor.name, updatedAt: now, ...signed }).where(eq(tableRevisions.id, open.id))
  audits.push(stateAudit('table.publish', { tableId: table.id, revisionId: open.id, revision: open.number, from: open.state, to: 'published', reason: open.reason }))
  await recordAudits(deps, audits)
  if (out) await tellHooks(deps, 'table.superseded', tableEvent(table, out, { by: open.number, reason }))
  await tellHooks(deps, 'table.published', tableEvent(table, open, { digest: signed.digest, supersedes: out?.number ?? null, publishedBy: actor.name }))
  return { outcome: 'published', revisionId: open.id, revision: open.number, supersedes: out?.number ?? null }
}
