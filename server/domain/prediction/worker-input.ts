import type { KnownTableTask, LinkTask, PredictStationInput } from '~~/server/workers/tasks/predict-station'
import type { PairInputs, ServedLink } from './load-inputs'
import type { KnownPass, KnownTable } from './load-known'
import type { PassTimes } from './quiet-during'
import { tableDigest } from './quiet-spans'

const HOUR_MS = 3_600_000

/** A pass that began up to an hour ago is still seen whole. */
export const windowStart = (now: Date): Date => new Date(now.getTime() - HOUR_MS)

export function linkTaskOf({ link, model, minElevationRad, radioModel, budget, firstRowLeadMs, quiet }: ServedLink): LinkTask {
  return { linkId: link.id, model, minElevationRad, radioModel, budget, firstRowLeadMs, quiet: [...quiet] }
}

/** The horizon, or as far as passes are known already, so that a shorter horizon leaves none with old elements. */
function windowEnd(now: Date, horizonDays: number, known: readonly KnownPass[]): number {
  const lastKnown = Math.max(...known.filter(pass => !pass.gone).map(pass => pass.los.getTime() + HOUR_MS), -Infinity)
  return Math.max(now.getTime() + horizonDays * 24 * HOUR_MS, lastKnown)
}

export function workerInputOf(inputs: PairInputs & { set: object }, known: readonly KnownPass[], now: Date): PredictStationInput {
  return {
    elements: inputs.set.elements,
    site: inputs.site,
    ut1MinusUtcS: inputs.ut1.ut1MinusUtcS,
    nowMs: now.getTime(),
    fromMs: windowStart(now).getTime(),
    toMs: windowEnd(now, inputs.settings.horizonDays, known),
    links: inputs.served.map(linkTaskOf),
    known: known.map(pass => ({
      id: pass.id,
      aosMs: pass.aos.getTime(),
      culminationMs: pass.culminationMs,
      gone: pass.gone,
      tables: pass.tables.flatMap((table) => {
        const served = inputs.served.find(({ link }) => link.id === table.linkId)
        return served ? [tableTaskOf(table, served, { aosMs: pass.aos.getTime(), losMs: pass.los.getTime() })] : []
      }),
    })),
  }
}

/** Rows made with the same inputs are not made again; rows that are out are rechecked once their inputs have changed. */
function tableTaskOf({ linkId, open, out, last }: KnownTable, served: ServedLink, pass: PassTimes): KnownTableTask {
  const { radio } = served
  const digest = tableDigest(served, pass)
  const isOutCurrent = out?.inputsDigest === digest
  const task: KnownTableTask = {
    linkId,
    plan: 'make',
    out: out && !isOutCurrent
      ? {
          rows: out.retunes!.map(row => ({ atMs: Date.parse(row.at), frequencyHz: row.frequencyHz, slopeHzPerS: row.slopeHzPerS })),
          verdict: out.verdict,
          worstResidualHz: out.worstResidualHz,
          otherRadio: out.radioId !== radio.id,
        }
      : null,
  }
  if (open) return { ...task, plan: open.inputsDigest === digest ? 'leave' : 'make' }
  if (out) return { ...task, plan: isOutCurrent ? 'leave' : 'make-if-moved' }
  // What was taken back by a person comes again only when it would be another table.
  return { ...task, plan: last?.state === 'withdrawn' && last.inputsDigest === digest ? 'leave' : 'make' }
}
