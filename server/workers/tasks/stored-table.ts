import type { CheckedRetune, Span, TableCheck, UtcMs } from '#shared/physics/types'
import type { StoredCheck, StoredRetune } from '~~/server/database/schema'

const DEG_PER_RAD = 180 / Math.PI

export const isoOf = (utcMs: UtcMs): string => new Date(Math.round(utcMs)).toISOString()
const spanOf = (span: Span) => ({ from: isoOf(span.fromMs), to: isoOf(span.toMs) })

/** Digits beyond what the numbers mean would only fill the published file. −0 becomes 0. */
const rounded = (value: number, digits: number): number => {
  const scale = 10 ** digits
  return Math.round(value * scale) / scale + 0
}

/** A checked row in degrees and ISO instants: 0.1 mHz, 0.1 mm/s, 1e-5 degrees. Frequency and slope stay exact. */
export function storedRetune(row: CheckedRetune): StoredRetune {
  return {
    at: isoOf(row.atMs),
    frequencyHz: row.frequencyHz,
    slopeHzPerS: row.slopeHzPerS,
    dopplerHz: rounded(row.dopplerHz, 4),
    rangeRateMps: rounded(row.rangeRateMps, 4),
    azimuthDeg: rounded(row.azimuthRad * DEG_PER_RAD, 5),
    elevationDeg: rounded(row.elevationRad * DEG_PER_RAD, 5),
    residualMinHz: rounded(row.residualMinHz, 4),
    residualMaxHz: rounded(row.residualMaxHz, 4),
    lossDb: row.lossDb === null ? null : rounded(row.lossDb, 5),
  }
}

/** `kappa` is 0 where no plan keeps to the allowance. */
export function storedCheck(check: TableCheck, parts: readonly Span[], kappa: number | null): StoredCheck {
  const { stepsHz, timingHz, ut1Hz, orbitHz, oscillatorHz, trimHz } = check.budget
  return {
    allowanceHz: check.allowance.allowanceHz,
    limitedBy: check.allowance.limitedBy,
    worstResidualHz: check.worstResidualHz,
    worstAt: isoOf(check.worstAtMs),
    margin: check.margin,
    budget: { stepsHz, timingHz, ut1Hz, orbitHz, oscillatorHz, trimHz },
    symbolClockPpm: { min: check.symbolClockPpm[0], max: check.symbolClockPpm[1] },
    excess: check.excess.map(spanOf),
    faults: check.faults.map(({ code, atMs, message }) => ({ code, at: isoOf(atMs), message })),
    kappa: kappa ?? 0,
    workable: parts.map(spanOf),
  }
}
