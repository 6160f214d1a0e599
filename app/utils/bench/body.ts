import type { z } from 'zod'
import { benchBudget, benchLink, benchPredictBody, benchRadio, benchStation } from '#shared/schemas/bench'
import { instantSchema } from '#shared/schemas/common'
import { plainIssue } from '../plain-issue'
import { pickLink, pickRadio, pickSite } from './question'
import type { BenchQuestion } from './question'

export type Errors = Record<string, string>
type Body = z.input<typeof benchPredictBody>

/** An instant as typed under "UTC": a blank for the T, seconds or not, and the zone may be left out. */
export function instantAsTyped(typed: string): string {
  const text = typed.trim().replace(/\s*UTC$/i, 'Z').replace(/^(\d{4}-\d{2}-\d{2})\s+/, '$1T')
  return /T[\d:.]+$/.test(text) ? `${text}Z` : text
}

/** The body of a prediction, as the interface takes it. */
export function bodyOf({ elements, station, window, link, radio, budget }: BenchQuestion): Body {
  return {
    elements: elements.source === 'held' ? { elementSetId: elements.id ?? '' } : { text: elements.text },
    station: station.source === 'held' ? { stationId: station.id ?? '' } : pickSite(station),
    from: instantAsTyped(window.from), to: instantAsTyped(window.to),
    sampleIntervalS: window.sampleIntervalS, ut1MinusUtcS: window.ut1MinusUtcS,
    link: link.source === 'held' ? { linkId: link.id ?? '' } : pickLink(link),
    radio: radio.source === 'held' ? { radioId: radio.id ?? '' } : pickRadio(radio),
    budget: { ...budget },
  }
}

/**
 * What cannot be sent, by path, in words: each part by its own schema, since a choice between two ways of giving a
 * part can only say that neither fits.
 */
export function problemsOf(question: BenchQuestion): Errors {
  const body = bodyOf(question)
  const errors: Errors = {}
  const check = (path: string, schema: z.ZodType, value: unknown) => {
    const result = schema.safeParse(value)
    for (const issue of result.error?.issues ?? []) errors[[path, ...issue.path.map(String)].join('.')] ??= plainIssue(issue)
  }
  const { elements, station, link, radio } = question
  if (elements.source === 'given' && elements.text.trim() === '') errors['elements.text'] = 'Paste one element set.'
  if (elements.source === 'held' && !elements.id) errors['elements.elementSetId'] = 'Choose an element set, or paste one.'
  if (station.source === 'held' && !station.id) errors['station.stationId'] = 'Choose a station, or give a place.'
  if (link.source === 'held' && !link.id) errors['link.linkId'] = 'Choose a link, or give its figures.'
  if (radio.source === 'held' && !radio.id) errors['radio.radioId'] = 'Choose a radio, or give its figures.'
  if (station.source === 'given') check('station', benchStation, body.station)
  if (link.source === 'given') check('link', benchLink, body.link)
  if (radio.source === 'given') check('radio', benchRadio, body.radio)
  check('from', instantSchema, body.from)
  check('to', instantSchema, body.to)
  check('sampleIntervalS', benchPredictBody.shape.sampleIntervalS, body.sampleIntervalS)
  check('ut1MinusUtcS', benchPredictBody.shape.ut1MinusUtcS, body.ut1MinusUtcS)
  check('budget', benchBudget, body.budget)
  return errors
}
