import { z } from 'zod'
import { idSchema, instantOut } from './common'

export const calendarAddressOut = z.object({ id: idSchema, createdBy: z.string(), createdAt: instantOut, lastUsedAt: instantOut.nullable() })
/** The address itself is shown here once and never again. */
export const calendarAddressMade = calendarAddressOut.extend({ url: z.string() })
/** 256 bits in base64url, as the last part of the address. */
export const calendarTokenParams = z.strictObject({ token: z.string().regex(/^[\w-]{43}\.ics$/).transform(text => text.slice(0, -'.ics'.length)) })
export const stationCalendarParams = z.strictObject({ id: idSchema, calendarId: idSchema })
