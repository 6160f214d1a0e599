import type { UtcMs, Verdict } from '#shared/physics/types'
import type { KnownPassTask, PredictStationInput, Recheck } from './predict-station'
import { predictStation } from './predict-station'

/** What a prediction would make of a table that exists. */
export interface PreviewedTable {
  linkId: string
  kind: 'left' | 'not-workable' | 'planned'
  planned: { verdict: Verdict, worstResidualHz: number, allowanceHz: number } | null
  recheck: Recheck | null
}
export interface PreviewedPass { knownId: string | null, untouched: boolean, tables: PreviewedTable[] }

export interface PreviewInput extends Omit<PredictStationInput, 'onlyKnown'> {
  /** Drafts of passes that rise later are left alone: planning is what takes long. */
  readonly draftsUntilMs: UtcMs
}

/** A prediction of one pair that nothing is kept of: verdicts and figures, without the rows. */
export function previewStation({ draftsUntilMs, ...input }: PreviewInput): PreviewedPass[] {
  const known = input.known.map(pass => ({ ...pass, tables: pass.tables.map(table => ({ ...table, plan: planOf(table, pass.aosMs <= draftsUntilMs) })) }))
  return predictStation({ ...input, known, onlyKnown: true }).passes.map(({ knownId, untouched, tables }) => ({
    knownId, untouched,
    tables: tables.map(({ linkId, kind, planned, recheck }) => ({
      linkId, kind, recheck,
      planned: planned && { verdict: planned.verdict, worstResidualHz: planned.check.worstResidualHz, allowanceHz: planned.check.allowanceHz },
    })),
  }))
}

/** Whether published rows move is told by them alone; what would take their place is planned when it is wanted. */
function planOf({ plan }: KnownPassTask['tables'][number], isNear: boolean): 'make' | 'leave' {
  return isNear && plan === 'make' ? 'make' : 'leave'
}
