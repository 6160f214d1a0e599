import { createEphemeris } from '#shared/physics/orbit/ephemeris'
import { findPasses } from '#shared/physics/orbit/passes'
import { createPropagator } from '#shared/physics/orbit/propagator'
import type { TableQuery } from '#shared/physics/predict/build-table'
import { buildTable, residualOfRows } from '#shared/physics/predict/build-table'
import type { Ephemeris, LinkModel, MeanElements, PredictedPass, PropagationError, RadioModel, RetuneRow, Site, Span, TableCheck, UplinkInUse, UtcMs, Verdict } from '#shared/physics/types'
import { needsNewRevision } from '#shared/table-life'
import type { StoredCheck, StoredRetune } from '~~/server/database/schema'
import { identityToleranceMs, matchPasses } from '~~/server/domain/prediction/match-passes'
import type { BudgetParameters } from '~~/server/domain/prediction/models'
import { isUplinkOf } from '~~/server/domain/prediction/models'
import { quietDuring } from '~~/server/domain/prediction/quiet-during'
import { budgetModelOf } from './budget-model'
import { isoOf, storedCheck, storedRetune } from './stored-table'

export interface LinkTask { linkId: string, model: LinkModel, minElevationRad: number, radioModel: RadioModel, budget: BudgetParameters, firstRowLeadMs: number, quiet: Span[] }

/** What is to be done for a table that exists: rows that are out are rechecked, a plan is made or not. */
export interface KnownTableTask {
  linkId: string
  plan: 'make' | 'leave' | 'make-if-moved'
  /** Rows that the station has, with the check they went out with. */
  out: { rows: RetuneRow[], verdict: Verdict, worstResidualHz: number, otherRadio: boolean } | null
}
export interface KnownPassTask { id: string, aosMs: UtcMs, culminationMs: UtcMs, gone: boolean, tables: KnownTableTask[] }

export interface PredictStationInput {
  elements: MeanElements
  site: Site
  ut1MinusUtcS: number
  nowMs: UtcMs
  fromMs: UtcMs
  toMs: UtcMs
  links: LinkTask[]
  known: KnownPassTask[]
  /** What tables exist is looked at; none is made where there is none. */
  onlyKnown?: boolean
}

export interface Recheck { verdict: Verdict, worstResidualHz: number, worstAt: string, allowanceHz: number, moved: boolean }
export interface PlannedTable { verdict: Verdict, retunes: StoredRetune[], check: StoredCheck }
export interface PredictedTable {
  linkId: string
  kind: 'left' | 'not-workable' | 'planned'
  planned: PlannedTable | null
  recheck: Recheck | null
}
export interface StationPass {
  knownId: string | null
  /** Begun, or cut by the window: stays as it is known, or waits for the next time if it is new. */
  untouched: boolean
  aosMs: UtcMs
  culminationMs: UtcMs
  losMs: UtcMs
  maxElevationDeg: number
  tables: PredictedTable[]
}
export interface PredictStationOutput { passes: StationPass[], endedBy: PropagationError | null }

/** Passes of one spacecraft over one station, told apart from those known, with a table for each link that needs one. */
export function predictStation(input: PredictStationInput): PredictStationOutput {
  const { elements, site, ut1MinusUtcS, nowMs, fromMs, toMs } = input
  const created = createPropagator(elements)
  if (!created.ok) return { passes: [], endedBy: created.error }
  const ephemeris = createEphemeris(created.propagator, fromMs, toMs)
  const { passes, endedBy } = findPasses({ ephemeris, site, fromMs, toMs, ut1MinusUtcS })
  const matches = matchPasses(passes, input.known, identityToleranceMs(elements.meanMotionRevPerDay))
  return {
    endedBy,
    passes: passes.map((pass, i) => {
      const known = matches[i] ?? null
      const untouched = pass.aosClipped || pass.losClipped || pass.aosMs <= nowMs || (known !== null && known.aosMs <= nowMs)
      return {
        knownId: known?.id ?? null,
        untouched,
        aosMs: Math.round(pass.aosMs),
        culminationMs: Math.round(pass.culminationMs),
        losMs: Math.round(pass.losMs),
        maxElevationDeg: pass.maxElevationRad * 180 / Math.PI,
        tables: untouched ? [] : tablesOf(input, known, { ephemeris, site, pass }),
      }
    }),
  }
}

const tableOf = (pass: KnownPassTask | null, { linkId }: LinkTask): KnownTableTask | undefined => pass?.tables.find(table => table.linkId === linkId)

function linksFor({ links, onlyKnown }: PredictStationInput, pass: KnownPassTask | null): LinkTask[] {
  return onlyKnown ? links.filter(link => tableOf(pass, link)) : links
}

interface PassOf { readonly ephemeris: Ephemeris, readonly site: Site, readonly pass: PredictedPass }

function tablesOf(input: PredictStationInput, known: KnownPassTask | null, at: PassOf): PredictedTable[] {
  return linksFor(input, known).map((link) => {
    const uplink = input.links.find(other => isUplinkOf(other.model, link.model))
    return predictTable(link, tableOf(known, link), at, () => uplink ? uplinkInUse(uplink, tableOf(known, uplink), at) : null)
  })
}

/** What the station sends up in the pass: rows that are out where they stay, else those planned now, as they were and will be with these inputs. */
function uplinkInUse(task: LinkTask, known: KnownTableTask | undefined, at: PassOf): UplinkInUse | null {
  const query = queryOf(task, at)
  const built = buildTable({ ...query, firstRowLeadMs: task.firstRowLeadMs })
  if (built.kind === 'not-workable') return null
  const out = known?.out ? residualOfRows({ ...query, rows: known.out.rows }) : null
  const stays = out && !('kind' in out) && known?.plan !== 'make' && !isMoved(known!.out!, out)
  return { carrierHz: task.model.carrierHz, radio: task.radioModel, parts: built.parts, retunes: (stays ? out : built.check).retunes }
}

function queryOf(task: LinkTask, { ephemeris, site, pass }: PassOf): TableQuery {
  const { model: link, minElevationRad: linkMinElevationRad, radioModel: radio } = task
  const quiet = quietDuring(task.quiet, pass, task.firstRowLeadMs)
  return { propagator: ephemeris.propagator, ephemeris, site, link, linkMinElevationRad, radio, budget: budgetModelOf(task.budget), pass, quiet }
}

const isMoved = (out: NonNullable<KnownTableTask['out']>, { verdict, worstResidualHz, allowance }: TableCheck): boolean =>
  out.otherRadio || needsNewRevision(out, { verdict, worstResidualHz, allowanceHz: allowance.allowanceHz })

function predictTable(task: LinkTask, known: KnownTableTask | undefined, at: PassOf, uplinkOf: () => UplinkInUse | null): PredictedTable {
  const { linkId } = task
  const plan = known?.plan ?? 'make'
  if (plan === 'leave' && !known?.out) return { linkId, kind: 'left', planned: null, recheck: null }
  const query = { ...queryOf(task, at), uplink: uplinkOf() }

  let recheck: Recheck | null = null
  if (known?.out) {
    const check = residualOfRows({ ...query, rows: known.out.rows })
    if ('kind' in check) return { linkId, kind: 'not-workable', planned: null, recheck: null }
    const { verdict, worstResidualHz, allowance: { allowanceHz } } = check
    recheck = { verdict, worstResidualHz, allowanceHz, worstAt: isoOf(check.worstAtMs), moved: isMoved(known.out, check) }
  }
  if (plan === 'leave' || (plan === 'make-if-moved' && !recheck?.moved)) return { linkId, kind: 'left', planned: null, recheck }

  const built = buildTable({ ...query, firstRowLeadMs: task.firstRowLeadMs })
  if (built.kind === 'not-workable') return { linkId, kind: 'not-workable', planned: null, recheck }
  return {
    linkId,
    kind: 'planned',
    planned: { verdict: built.check.verdict, retunes: built.check.retunes.map(storedRetune), check: storedCheck(built.check, built.parts, built.kappa) },
    recheck,
  }
}
