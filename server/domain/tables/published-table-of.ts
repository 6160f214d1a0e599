import { eq } from 'drizzle-orm'
import type { PublishedTable } from '#shared/formats/published-table'
import { cautionFor, publishedTableSchema } from '#shared/formats/published-table'
import { elementSets, radios } from '~~/server/database/schema'
import type { Deps } from '../context'
import type { RadioRow } from '../prediction/models'
import { converterOf, rampOf } from '../prediction/models'
import type { LockedTable, RevisionRow } from './lock-table'

/** Everything that goes out with a revision: what is digested, signed, and served for as long as it is the newest. */
export async function publishedTableOf({ db, now }: Pick<Deps, 'db' | 'now'>, { id, pass, link, station, craft }: LockedTable, revision: RevisionRow, supersedes: PublishedTable['supersedes']): Promise<PublishedTable> {
  const [radio] = await db.select().from(radios).where(eq(radios.id, revision.radioId))
  const [set] = await db.select({ id: elementSets.id, epochUtcUs: elementSets.epochUtcUs, sha256: elementSets.sha256 }).from(elementSets).where(eq(elementSets.id, revision.elementSetId))
  const { allowanceHz, limitedBy, worstResidualHz, worstAt, margin, budget, symbolClockPpm } = revision.check
  return publishedTableSchema.parse({
    id,
    revision: revision.number,
    publishedAt: now.toISOString(),
    pass: {
      id: pass.id,
      spacecraft: { id: craft.id, name: craft.name, catalogueNumber: craft.catalogueNumber },
      station: { id: station.id, name: station.name },
      aos: pass.aos.toISOString(), culmination: pass.culmination.toISOString(), los: pass.los.toISOString(), maxElevationDeg: pass.maxElevationDeg,
    },
    link: publishedLink(link),
    radio: publishedRadio(radio!),
    plan: { mode: radio!.planMode, cadenceS: radio!.planMode === 'cadence' ? radio!.cadenceS : null },
    verdict: revision.verdict,
    allowanceHz, limitedBy, worstResidualHz, worstAt, margin, budget, symbolClockPpm,
    elementSet: { id: set!.id, epoch: isoMicroseconds(set!.epochUtcUs), sha256: set!.sha256 },
    supersedes,
    retunes: revision.retunes,
    caution: cautionFor(link.direction),
  })
}

function publishedLink({ id, name, direction, carrierHz, symbolRateHz, bandLowHz, bandHighHz, turnaroundNumerator, turnaroundDenominator, uplinkPrecompensated }: LockedTable['link']): PublishedTable['link'] {
  const turnaround = turnaroundNumerator === null || turnaroundDenominator === null ? {} : { turnaround: { numerator: turnaroundNumerator, denominator: turnaroundDenominator, uplinkPrecompensated } }
  return { id, name, direction, carrierHz, symbolRateHz, bandLowHz, bandHighHz, ...turnaround }
}

/** The facts of a radio that its rows are read with; ramp and converter where it has them. */
export function publishedRadio(radio: RadioRow): PublishedTable['radio'] {
  const { id, name, stepHz, offsetHz, minDwellS, latencyMs } = radio
  const [ramp, converter] = [rampOf(radio), converterOf(radio)]
  return { id, name, stepHz, offsetHz, minDwellS, latencyMs, ...(ramp ? { ramp } : {}), ...(converter ? { converter } : {}) }
}

/** Milliseconds, or microseconds where the set gives them. */
export function isoMicroseconds(utcUs: number): string {
  const iso = new Date(Math.floor(utcUs / 1000)).toISOString()
  const rest = ((utcUs % 1000) + 1000) % 1000
  return rest === 0 ? iso : `${iso.slice(0, -1)}${String(rest).padStart(3, '0')}Z`
}
