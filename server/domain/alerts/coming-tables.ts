import { sql } from 'drizzle-orm'

/** Tables with their pass, link, spacecraft and station; what is retired or no longer predicted needs nobody. */
export const comingTables = sql`
  tables t
  JOIN passes p ON p.id = t.pass_id
  JOIN links l ON l.id = t.link_id AND l.retired_at IS NULL
  JOIN spacecraft sc ON sc.id = p.spacecraft_id AND sc.retired_at IS NULL
  JOIN stations st ON st.id = p.station_id AND st.retired_at IS NULL`

/** The driver takes instants as text where a statement is written by hand. */
export const at = (instant: Date) => sql`${instant.toISOString()}::timestamptz`
