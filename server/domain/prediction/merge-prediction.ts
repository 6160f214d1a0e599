import { randomUUID } from 'node:crypto'
import type { passes, tables } from '~~/server/database/schema'
import type { PredictStationOutput, StationPass } from '~~/server/workers/tasks/predict-station'
import type { AuditEntry } from '../audit'
import type { RevisionChange, RevisionInsert, TableDecision } from './decide-table'
import { decideTable, lapse } from './decide-table'
import type { PairInputs, ServedLink } from './load-inputs'
import type { KnownPass, KnownTable } from './load-known'
import { tableDigest } from './quiet-spans'
import type { RecheckOutcome } from './recheck-outcome'

export interface PassChange { id: string, elementSetId: string, aos: string, culmination: string, los: string, maxElevationDeg: number }

/** All rows that one prediction writes. */
export interface Merge {
  passInserts: (typeof passes.$inferInsert & { id: string })[]
  passChanges: PassChange[]
  gonePassIds: string[]
  tableInserts: (typeof tables.$inferInsert & { id: string })[]
  revisionInserts: RevisionInsert[]
  revisionChanges: RevisionChange[]
  lapses: { id: string, reason: string }[]
  audits: AuditEntry[]
  rechecks: RecheckOutcome[]
}

export interface MergeCase {
  readonly inputs: PairInputs
  readonly known: readonly KnownPass[]
  /** Null: nothing is predicted for this pair any more. */
  readonly predicted: PredictStationOutput | null
  readonly reason: string
  readonly now: Date
}

/** Joins a prediction to what is known: passes keep their identity, what has begun stays, what vanished is marked. Changes nothing itself. */
export function mergePrediction(given: MergeCase): Merge {
  const { inputs, known, predicted, reason, now } = given
  const merge: Merge = { passInserts: [], passChanges: [], gonePassIds: [], tableInserts: [], revisionInserts: [], revisionChanges: [], lapses: [], audits: [], rechecks: [] }
  const seen = new Set<string>()
  for (const pass of predicted?.passes ?? []) {
    if (pass.knownId) seen.add(pass.knownId)
    const knownPass = known.find(({ id }) => id === pass.knownId) ?? null
    if (pass.untouched) noteAsPublished(merge, knownPass, now)
    else mergePass(merge, given, pass, knownPass)
  }
  const why = inputs.stopped ?? `The pass is no longer predicted. ${reason}`
  for (const pass of known) {
    if (seen.has(pass.id) || pass.aos <= now) continue
    if (!pass.gone) merge.gonePassIds.push(pass.id)
    for (const table of pass.tables) endTable(merge, pass, table, why)
  }
  return merge
}

function mergePass(merge: Merge, given: MergeCase, pass: StationPass, known: KnownPass | null): void {
  const { inputs, reason, now } = given
  const elementSetId = inputs.set!.id
  const passId = known?.id ?? randomUUID()
  const aos = new Date(pass.aosMs)
  const culmination = new Date(pass.culminationMs)
  const los = new Date(pass.losMs)
  if (!known) {
    merge.passInserts.push({ id: passId, spacecraftId: inputs.craft.id, stationId: inputs.station.id, elementSetId, aos, culmination, los, maxElevationDeg: pass.maxElevationDeg, createdAt: now })
  }
  else merge.passChanges.push({ id: passId, elementSetId, aos: aos.toISOString(), culmination: culmination.toISOString(), los: los.toISOString(), maxElevationDeg: pass.maxElevationDeg })

  for (const predicted of pass.tables) {
    const served = inputs.served.find(({ link }) => link.id === predicted.linkId)!
    const table = known?.tables.find(({ linkId }) => linkId === predicted.linkId) ?? null
    const tableId = table?.id ?? randomUUID()
    if (!table && predicted.planned) merge.tableInserts.push({ id: tableId, passId, linkId: served.link.id, createdAt: now })
    take(merge, decideTable({ tableId, known: table, served, predicted, digest: tableDigest(served, pass), elementSetId, reason, now, newId: randomUUID }))
    if (table?.out) merge.rechecks.push(recheckOf(passId, table, served, predicted))
  }
  for (const table of known?.tables ?? []) {
    const why = inputs.unserved.get(table.linkId)
    if (why) endTable(merge, known!, table, why)
  }
}

function take(merge: Merge, { insert, change, lapse: ended, audits }: TableDecision): void {
  if (insert) merge.revisionInserts.push(insert)
  if (change) merge.revisionChanges.push(change)
  if (ended) merge.lapses.push(ended)
  merge.audits.push(...audits)
}

/** No table would be made any more: what is not out lapses, what is out stays and is reported. */
function endTable(merge: Merge, pass: KnownPass, table: KnownTable, why: string): void {
  if (table.open) take(merge, lapse(table.id, table.open, why))
  if (table.out) merge.rechecks.push({ ...outcomeOf(pass.id, table), verdict: null, worstResidualHz: null, allowanceHz: null, gone: why })
}

function noteAsPublished(merge: Merge, pass: KnownPass | null, now: Date): void {
  if (!pass || pass.aos <= now) return
  for (const table of pass.tables) {
    if (table.out) merge.rechecks.push(outcomeOf(pass.id, table))
  }
}

/** Of a table that is out: as it went out. */
function outcomeOf(passId: string, { id, linkId, out }: KnownTable): RecheckOutcome {
  const { number, verdict, worstResidualHz, allowanceHz } = out!
  return { tableId: id, passId, linkId, revision: number, verdict, worstResidualHz, allowanceHz, gone: null }
}

function recheckOf(passId: string, table: KnownTable, served: ServedLink, { kind, recheck }: StationPass['tables'][number]): RecheckOutcome {
  const outcome = outcomeOf(passId, table)
  if (kind === 'not-workable') return { ...outcome, verdict: null, worstResidualHz: null, allowanceHz: null, gone: `The pass no longer rises above the minimum elevation of ${served.link.name}.` }
  return recheck ? { ...outcome, verdict: recheck.verdict, worstResidualHz: recheck.worstResidualHz, allowanceHz: recheck.allowanceHz } : outcome
}
