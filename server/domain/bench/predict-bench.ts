import type { BenchAnswer, BenchPass } from '#shared/physics/predict/bench-predict'
import type { Span, TableCheck } from '#shared/physics/types'
import type { BenchPredictBody, BenchPredictOut } from '#shared/schemas/bench'
import { benchBudget } from '#shared/schemas/bench'
import { TaskTooHeavy, runTask } from '~~/server/workers/pool'
import type { Deps } from '../context'
import { propagationErrorText } from '../elements/propagation-error-text'
import { DomainError } from '../errors'
import { resolveElements, resolveLink, resolveRadio, resolveSite } from './resolve-inputs'

export const longestWindowDays = 14
export const mostSamples = 100_000
/** Ordinary questions take a second or two; one with hundreds of thousands of retunes is stopped. */
const limitMs = 60_000

const DAY_MS = 86_400_000
const DEG_PER_RAD = 180 / Math.PI
const instant = (utcMs: number) => new Date(Math.round(utcMs)).toISOString()
const refuse = (path: string, message: string) => new DomainError('not-valid', `${path}: ${message}`, [{ path, message }])

/** A what-if: passes, samples and a checked table for any elements, station and link. Nothing is stored. */
export async function predictBench(deps: Deps, body: BenchPredictBody): Promise<BenchPredictOut> {
  const [fromMs, toMs] = [Date.parse(body.from), Date.parse(body.to)]
  if (toMs <= fromMs) throw refuse('to', 'Give an end after the beginning.')
  if (toMs - fromMs > longestWindowDays * DAY_MS) throw refuse('to', `A window of at most ${longestWindowDays} days is answered: give an earlier end.`)
  const { elements, warnings } = await resolveElements(deps, body.elements)
  const site = await resolveSite(deps, body.station)
  const { link, linkMinElevationRad } = await resolveLink(deps, body.link)
  const radio = await resolveRadio(deps, body.radio)
  const budget = { ...(body.budget ?? benchBudget.parse({})), ut1MinusUtcS: body.ut1MinusUtcS }
  const answer = await runTask('bench-predict', { elements, site, fromMs, toMs, sampleIntervalS: body.sampleIntervalS, link, linkMinElevationRad, radio, budget, mostSamples }, { limitMs }).catch((error: unknown) => {
    if (error instanceof TaskTooHeavy) throw refuse('to', `This takes longer than the ${limitMs / 1000} s that a question may: take a shorter window, or a radio or link that needs fewer retunes.`)
    throw error
  })
  const { passes, endedBy, validUntilMs } = requirePasses(answer)
  const ended = endedBy ? [`The elements can be used until ${instant(validUntilMs)} only: ${propagationErrorText[endedBy]}. No pass is given after that.`] : []
  return { passes: passes.map(passOut), notes: [...warnings, ...ended] }
}

function requirePasses(answer: BenchAnswer) {
  if (answer.kind === 'unusable') throw refuse('elements', `SGP4 fails with these elements at their own epoch: ${propagationErrorText[answer.error]}. Check their numbers.`)
  if (answer.kind === 'too-many-samples') throw refuse('sampleIntervalS', `At most ${mostSamples.toLocaleString('en-GB')} samples are answered; this would be ${answer.count.toLocaleString('en-GB')}. Take a longer interval or a shorter window.`)
  return answer
}

function passOut({ pass, samples, table, parts }: BenchPass): BenchPredictOut['passes'][number] {
  return {
    aos: instant(pass.aosMs), culmination: instant(pass.culminationMs), los: instant(pass.losMs), maxElevationDeg: pass.maxElevationRad * DEG_PER_RAD,
    ...(pass.aosClipped ? { aosClipped: true } : {}),
    ...(pass.losClipped ? { losClipped: true } : {}),
    samples: samples.map(({ atMs, azimuthRad, elevationRad, horizonRad, ...rest }) => ({
      at: instant(atMs), azimuthDeg: azimuthRad * DEG_PER_RAD, elevationDeg: elevationRad * DEG_PER_RAD, horizonDeg: horizonRad * DEG_PER_RAD, ...rest,
    })),
    table: table && { ...tableOut(table), workable: spansOut(parts) },
  }
}

const spansOut = (spans: readonly Span[]) => spans.map(span => ({ from: instant(span.fromMs), to: instant(span.toMs) }))

function tableOut(check: TableCheck): Omit<NonNullable<BenchPredictOut['passes'][number]['table']>, 'workable'> {
  const { verdict, allowance, worstResidualHz, margin, budget } = check
  const { stepsHz, timingHz, ut1Hz, orbitHz, oscillatorHz, trimHz } = budget
  return {
    verdict, allowanceHz: allowance.allowanceHz, limitedBy: allowance.limitedBy, worstResidualHz, worstAt: instant(check.worstAtMs), margin,
    budget: { stepsHz, timingHz, ut1Hz, orbitHz, oscillatorHz, trimHz },
    excess: spansOut(check.excess),
    faults: check.faults.map(({ code, atMs, message }) => ({ code, at: instant(atMs), message })),
    retunes: check.retunes.map(({ atMs, azimuthRad, elevationRad, frequencyHz, slopeHzPerS, dopplerHz, rangeRateMps, residualMinHz, residualMaxHz, lossDb }) => ({
      at: instant(atMs), frequencyHz, slopeHzPerS, dopplerHz, rangeRateMps,
      azimuthDeg: azimuthRad * DEG_PER_RAD, elevationDeg: elevationRad * DEG_PER_RAD, residualMinHz, residualMaxHz, lossDb,
    })),
  }
}
