import type { alerts } from '~~/server/database/schema'

export type AlertKind = typeof alerts.$inferSelect['kind']
export type Severity = typeof alerts.$inferSelect['severity']

/** Something that calls for a person, as it stands now. One alert stands for one cause, whatever the number of tables. */
export interface Cause {
  kind: AlertKind
  /** Names the cause; the same text as long as it is the same cause. */
  cause: string
  severity: Severity
  title: string
  detail: string
  action: string
  spacecraftId?: string
  stationId?: string
  /** The first table concerned. */
  tableId?: string
  /** The instant it is about, such as the first AOS concerned. */
  dueAt?: Date
  count: number
  /** How bad, on a scale of the kind's own; a fifth more counts as worse. */
  weight: number
  /** False: not bad enough to raise an alert, but too bad to close one (hysteresis). */
  raises: boolean
  /** True: only that it stands is known; the words of the alert stay. */
  keepsWords?: boolean
}

/** What is looked at: everything, or some kinds, or one spacecraft or station. */
export interface CauseScope { kinds?: readonly AlertKind[], spacecraftId?: string, stationId?: string }

/** A cause that somebody set aside calls again only when it is worse by this factor, or has been gone. */
export const worseFactor = 1.2
/** A cause that comes back this soon after it went away by itself raises an alert again, but no second mail. */
export const flutterMs = 30 * 60_000
