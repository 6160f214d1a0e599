import { asc, eq } from 'drizzle-orm'
import type { Db } from '../../../server/database/client'
import { passes, tableRevisions } from '../../../server/database/schema'
import type { PersonActor } from '../../../server/domain/context'
import { scheduleActor, systemActor } from '../../../server/domain/context'
import { DomainError } from '../../../server/domain/errors'
import { loadInputs } from '../../../server/domain/prediction/load-inputs'
import { loadKnown } from '../../../server/domain/prediction/load-known'
import { mergePrediction } from '../../../server/domain/prediction/merge-prediction'
import { writePrediction } from '../../../server/domain/prediction/write-prediction'
import { collectTable } from '../../../server/domain/station/collect-table'
import { approveTable } from '../../../server/domain/tables/approve-table'
import { holdTable, releaseTable } from '../../../server/domain/tables/hold-table'
import { lapseDue } from '../../../server/domain/tables/lapse-due'
import { publishRevision } from '../../../server/domain/tables/publish-revision'
import { publishTable } from '../../../server/domain/tables/publish-table'
import { withdrawTable } from '../../../server/domain/tables/withdraw-table'
import { addActor, addPass, addSpacecraft, addStation, checkOf } from '../../support/fixtures'

export type Revision = typeof tableRevisions.$inferSelect
export type Step =
  | { kind: 'approve' | 'publish', person: 'Ada' | 'Bo' | 'Cleo' }
  | { kind: 'hold' | 'release' | 'withdraw' | 'collect' | 'schedule' | 'lapse' }
  | { kind: 'predict', residualHz: number, publishedResidualHz: number }
  | { kind: 'wait', minutes: number }

export const allowanceHz = 1000
const minuteMs = 60_000
export const freezeMinutes = 10

/** Verdicts as the product's description has them: within four fifths of the allowance, within it, beyond it. */
export const verdictOf = (residualHz: number) => residualHz <= 0.8 * allowanceHz ? 'holds' : residualHz <= allowanceHz ? 'tight' : 'breaks'

/** One pass with one table, moved by the same functions as in the product; only what the physics say is given by the test. */
export async function makeWorld(db: Db, { rule, start }: { rule: boolean, start: Date }) {
  const craft = await addSpacecraft(db, start, {}, { approveWhatHolds: rule })
  const station = await addStation(db, { freezeMinutes })
  const aos = new Date(start.getTime() + 180 * minuteMs)
  const pass = await addPass(db, craft, station, aos)
  const people: Record<'Ada' | 'Bo' | 'Cleo', PersonActor> = { Ada: await addActor(db, ['operator']), Bo: await addActor(db, ['operator']), Cleo: await addActor(db, ['on-call']) }
  let now = start
  let tableId = ''
  const revisions = (): Promise<Revision[]> => tableId ? db.select().from(tableRevisions).where(eq(tableRevisions.tableId, tableId)).orderBy(asc(tableRevisions.number)) : Promise.resolve([])

  async function predict(residualHz: number, publishedResidualHz: number): Promise<void> {
    await db.transaction(async (tx) => {
      const ids = { spacecraftId: craft.id, stationId: station.id }
      const inputs = await loadInputs({ db: tx, now }, ids)
      const known = await loadKnown({ db: tx }, ids, start)
      const { open = null, out = null, last = null } = known[0]!.tables[0] ?? {}
      const recheck = out && { verdict: verdictOf(publishedResidualHz), worstResidualHz: publishedResidualHz, worstAt: aos.toISOString(), allowanceHz } as const
      const moved = recheck !== null && (recheck.verdict !== out!.verdict || Math.abs(publishedResidualHz - out!.worstResidualHz) > allowanceHz / 5)
      const plans = open !== null || out === null || moved
      const margin = allowanceHz / residualHz
      const planned = plans ? { verdict: verdictOf(residualHz), check: checkOf(margin, aos), retunes: [{ at: aos.toISOString(), frequencyHz: 437_500_000 + Math.round(residualHz), slopeHzPerS: 0, dopplerHz: 0, rangeRateMps: 0, azimuthDeg: 0, elevationDeg: 5, residualMinHz: -residualHz, residualMaxHz: residualHz, lossDb: 0 }] } as const : null
      const merge = mergePrediction({
        inputs, known, now, reason: 'new elements',
        predicted: { endedBy: null, passes: [{
          knownId: pass.id, untouched: aos <= now, aosMs: aos.getTime(), culminationMs: pass.culmination.getTime(), losMs: pass.los.getTime(), maxElevationDeg: 42,
          tables: aos <= now ? [] : [{ linkId: craft.link.id, kind: planned ? 'planned' : 'left', planned: planned && { ...planned, retunes: [...planned.retunes] }, recheck: recheck && { ...recheck, moved } }],
        }] },
      })
      await writePrediction({ db: tx, now, actor: systemActor }, merge)
      tableId ||= merge.tableInserts[0]?.id ?? last?.tableId ?? ''
    })
  }

  /** Does one step; gives why it was refused, or null. */
  async function take(step: Step): Promise<string | null> {
    const id = tableId
    try {
      switch (step.kind) {
        case 'wait': now = new Date(now.getTime() + step.minutes * minuteMs); return null
        case 'predict': await predict(step.residualHz, step.publishedResidualHz); return null
        case 'lapse': await lapseDue({ db, now, actor: scheduleActor }); return null
        case 'approve': await approveTable({ db, now, actor: people[step.person] }, { id }); return null
        case 'publish': await publishTable({ db, now, actor: people[step.person] }, { id }); return null
        case 'hold': await holdTable({ db, now, actor: people.Ada }, { id, reason: 'A test holds it' }); return null
        case 'release': await releaseTable({ db, now, actor: people.Ada }, { id }); return null
        case 'withdraw': await withdrawTable({ db, now, actor: people.Ada }, { id, reason: 'A test takes it back' }); return null
        case 'schedule': {
          const { outcome } = await publishRevision({ db, now, actor: scheduleActor }, { tableId: id, mover: 'schedule' })
          return outcome === 'published' ? null : outcome
        }
        case 'collect': {
          const out = (await revisions()).find(({ state }) => state === 'published')
          if (out) await collectTable({ db, now, actor: { kind: 'key', id: people.Ada.id, name: 'Controller', scope: 'station', stationId: station.id } }, { revisionId: out.id, tableId: id, revision: out.number })
          return out ? null : 'nothing to collect'
        }
      }
    }
    catch (error) {
      if (error instanceof DomainError && (error.code === 'conflict' || error.code === 'not-allowed')) return error.message
      throw error
    }
  }
  await predict(500, 500)
  return {
    take, revisions, aos, get now() { return now }, people,
    /** Out of the way of the next sequence. */
    retire: () => db.delete(passes).where(eq(passes.id, pass.id)),
  }
}
