import type { Verdict } from '#shared/physics/types'
import type { PredictStationInput, Recheck } from './predict-station'
import { predictStation } from './predict-station'

/** What a prediction would make of a table that exists. */
export interface PreviewedTable {
  linkId: string
  kind: 'left' | 'not-workable' | 'planned'
  planned: { verdict: Verdict, worstResidualHz: number, allowanceHz: number } | null
  recheck: Recheck | null
}
export interface PreviewedPass { knownId: string | null, untouched: boolean, tables: PreviewedTable[] }

/** A prediction of one pair that nothing is kept of: verdicts and figures, without the rows. */
export function previewStation(input: Omit<PredictStationInput, 'onlyKnown'>): PreviewedPass[] {
  return predictStation({ ...input, onlyKnown: true }).passes.map(({ knownId, untouched, tables }) => ({
    knownId, untouched,
    tables: tables.map(({ linkId, kind, planned, recheck }) => ({
      linkId, kind, recheck,
      planned: planned && { verdict: planned.verdict, worstResidualHz: planned.check.worstResidualHz, allowanceHz: planned.check.allowanceHz },
    })),
  }))
}
