import { z } from 'zod'

// In the browser schemas are interpreted: their compiled form needs eval, which the content security policy forbids.
if ('window' in globalThis) z.config({ jitless: true })

export const idSchema = z.uuid()

/** What ISO 8601 writes with four digits and the database reads. */
const [firstMs, lastMs] = [Date.parse('1000-01-01T00:00:00.000Z'), Date.parse('9999-12-31T23:59:59.999Z')]

/** Any offset is accepted and converted; an instant without a zone is refused. Out: UTC, milliseconds, Z. */
export const instantSchema = z.string()
  .regex(/^\d{4}-\d{2}-\d{2}T\d{2}:\d{2}(:\d{2}(\.\d{1,9})?)?(Z|[+-]\d{2}:\d{2})$/, 'Write an instant as 2026-12-01T03:12:45.000Z; a zone (Z or +01:00) is needed.')
  .refine(text => Number.isFinite(Date.parse(text)) && dayExists(text), 'This day or time does not exist.')
  .refine(text => !(Date.parse(text) < firstMs || Date.parse(text) > lastMs), 'Give a year from 1000 to 9999.')
  .transform(text => new Date(Date.parse(text)).toISOString())
  .meta({ format: 'date-time' })

/** In an address a plus sign that was not escaped arrives as a space; before an offset it can have been nothing else. */
export const instantQuerySchema = z.string().transform(text => text.replace(/ (?=\d{2}:\d{2}$)/, '+')).pipe(instantSchema).meta({ format: 'date-time' })

function dayExists(text: string): boolean {
  const [year, month, day] = text.slice(0, 10).split('-').map(Number) as [number, number, number]
  return new Date(Date.UTC(year, month - 1, day)).getUTCDate() === day
}

/** As answered: always UTC with milliseconds. */
export const instantOut = z.string().meta({ format: 'date-time' })

// Control characters would travel into mails, headers and files.
// eslint-disable-next-line no-control-regex
const plainText = /^[^\u0000-\u001F\u007F]*$/
export const nameSchema = z.string().trim().min(1, 'Give a name.').max(80, 'At most 80 characters.').regex(plainText, 'No control characters or line breaks.')
export const reasonSchema = z.string().trim().min(3, 'Say why, in a few words.').max(500, 'At most 500 characters.').regex(plainText, 'No control characters or line breaks.')
export const shortTextSchema = z.string().trim().max(200, 'At most 200 characters.').regex(plainText, 'No control characters or line breaks.')

export const zoneSchema = z.string().max(64).refine((zone) => {
  try {
    new Intl.DateTimeFormat('en', { timeZone: zone })
    return true
  }
  catch {
    return false
  }
}, 'Not a known time zone: use a name such as Europe/Oslo or UTC.')

export const positive = (message = 'More than zero.') => z.number().positive(message)
export const atLeastZero = (message = 'Zero or more.') => z.number().min(0, message)

export const pageQuery = z.strictObject({
  limit: z.coerce.number().int().min(1).max(1000).default(100),
  cursor: z.string().max(200).optional(),
})
export const listOf = <T extends z.ZodType>(item: T) => z.object({ items: z.array(item), nextCursor: z.string().nullable() })
export const idParams = z.strictObject({ id: idSchema })
