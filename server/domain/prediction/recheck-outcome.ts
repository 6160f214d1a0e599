import type { Verdict } from '#shared/physics/types'

/** How rows that a station has stand up to what is predicted now; one for every table of the pair that is out and still to come. */
export interface RecheckOutcome {
  tableId: string
  passId: string
  linkId: string
  revision: number
  /** Of the rows as published, against the present prediction; null where there is nothing left to hold them against. */
  verdict: Verdict | null
  worstResidualHz: number | null
  allowanceHz: number | null
  /** In words why no table would be made for this pass and link any more; null while it would. */
  gone: string | null
}

/** What one computation of one spacecraft at one station led to. */
export interface PredictionOutcome {
  spacecraftId: string
  stationId: string
  reason: string
  passes: { added: number, changed: number, gone: number }
  revisions: { drafted: number, recomputed: number, lapsed: number }
  rechecks: RecheckOutcome[]
}
