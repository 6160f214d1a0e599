import { sql } from 'drizzle-orm'

/** Tables with their pass, link, spacecraft, station and own times; what is retired or no longer predicted needs nobody. */
export const comingTables = sql`
  tables t
  JOIN passes p ON p.id = t.pass_id
  JOIN links l ON l.id = t.link_id AND l.retired_at IS NULL
  JOIN spacecraft sc ON sc.id = p.spacecraft_id AND sc.retired_at IS NULL
  JOIN stations st ON st.id = p.station_id AND st.retired_at IS NULL
  LEFT JOIN publication_rules pr ON pr.station_id = st.id AND pr.link_id = l.id`

/** The last slot before AOS: the link's own lead, or its station's. */
export const leadSlot = sql`p.aos - make_interval(mins => coalesce(pr.lead_minutes, st.publish_lead_minutes))`

/** The driver takes instants as text where a statement is written by hand. */
export const at = (instant: Date) => sql`${instant.toISOString()}::timestamptz`
