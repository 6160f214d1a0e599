import { DomainError } from '../errors'

/** The notations of a table that stations are served. */
export const notations = { json: 'application/json', csv: 'text/csv', tdm: 'text/plain' } as const
export type Notation = keyof typeof notations

/**
 * Chooses by an Accept header (RFC 9110, section 12.5.1): the more specific range says a type's quality, the higher
 * quality wins, and JSON where both are as welcome.
 * @throws DomainError `not-acceptable`
 */
export function chooseNotation(accept: string | undefined): Notation {
  const ranges = (accept?.trim() || '*/*').split(',').map(readRange)
  const best = (Object.keys(notations) as Notation[])
    .map(notation => ({ notation, quality: qualityOf(notations[notation], ranges) }))
    .reduce((one, other) => other.quality > one.quality ? other : one)
  if (best.quality > 0) return best.notation
  throw new DomainError('not-acceptable', 'A table is served as application/json, text/csv or text/plain (CCSDS TDM): name one of them in Accept.')
}

interface Range { type: string, quality: number }

function readRange(text: string): Range {
  const [type = '', ...parameters] = text.split(';').map(part => part.trim().toLowerCase())
  const weight = parameters.find(parameter => parameter.startsWith('q='))
  const quality = weight === undefined ? 1 : Number(weight.slice(2))
  return { type, quality: quality >= 0 && quality <= 1 ? quality : 0 }
}

function qualityOf(type: string, ranges: readonly Range[]): number {
  const family = `${type.split('/', 1)[0]}/*`
  for (const wanted of [type, family, '*/*']) {
    const range = ranges.find(candidate => candidate.type === wanted)
    if (range) return range.quality
  }
  return 0
}
