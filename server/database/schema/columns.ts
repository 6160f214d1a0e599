import { sql } from 'drizzle-orm'
import { doublePrecision, timestamp, uuid } from 'drizzle-orm/pg-core'

/** Instants are kept to the millisecond: the driver drops what is finer. */
export const instant = (name: string) => timestamp(name, { withTimezone: true, precision: 3, mode: 'date' })
export const createdAt = () => instant('created_at').notNull().default(sql`now()`)
export const id = () => uuid('id').primaryKey().defaultRandom()
export const real = doublePrecision
