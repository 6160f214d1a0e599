import { eq } from 'drizzle-orm'
import type { PassSamplesOut } from '#shared/schemas/tables'
import { passes, tables } from '~~/server/database/schema'
import { runTask } from '~~/server/workers/pool'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { loadInputs } from '../prediction/load-inputs'
import { linkTaskOf } from '../prediction/worker-input'

const MOST_SAMPLES = 20_000

/** The curves of a pass with the element set it was predicted with, for each link that the station serves. */
export async function samplePass({ db, now }: Pick<Deps, 'db' | 'now'>, { id, stepS }: { id: string, stepS: number }): Promise<PassSamplesOut> {
  const [pass] = await db.select().from(passes).where(eq(passes.id, id))
  if (!pass) throw new DomainError('not-found', 'There is no pass under this address.')
  const [aosMs, culminationMs, losMs] = [pass.aos.getTime(), pass.culmination.getTime(), pass.los.getTime()]
  const shortestS = Math.ceil((losMs - aosMs) / MOST_SAMPLES) / 1000
  if (stepS < shortestS) throw new DomainError('not-valid', `stepS: this pass is long; a step of ${shortestS} s or more keeps it to ${MOST_SAMPLES} samples.`, [{ path: 'stepS', message: `At least ${shortestS} s for a pass this long.` }])

  const inputs = await loadInputs({ db, now }, pass, pass.elementSetId)
  const own = await db.select({ id: tables.id, linkId: tables.linkId }).from(tables).where(eq(tables.passId, id))
  const curves = await runTask('pass-samples', {
    elements: inputs.set!.elements, site: inputs.site, ut1MinusUtcS: inputs.ut1.ut1MinusUtcS, aosMs, culminationMs, losMs, stepS, links: inputs.served.map(linkTaskOf),
  })
  return {
    passId: id,
    samples: curves.samples,
    links: curves.links.map(({ linkId, ...curve }) => ({ linkId, tableId: own.find(table => table.linkId === linkId)?.id ?? null, ...curve })),
  }
}
