import type { Deps } from '../context'
import type { AlertKind, Cause, CauseScope } from './cause'
import { findAutoUseDeclined } from './auto-use-declined'
import { findDecisionDue } from './decision-due'
import { findElementsOld } from './elements-old'
import { findNotCollected } from './not-collected'
import { findPublicationFailed } from './publication-failed'
import { findPublishedTableBreaks } from './published-table-breaks'
import { findResidualAhead } from './residual-ahead'
import { findServerSilent } from './server-silent'
import { findSlotsMissed } from './slots-missed'
import { findStationRefused } from './station-refused'
import { findWebHookFailing } from './web-hook-failing'

type Finder = (deps: Pick<Deps, 'db' | 'now'>, scope: CauseScope) => Promise<Cause[]>

/** Kinds that are not here are raised where they happen. */
const finders: Partial<Record<AlertKind, Finder>> = {
  'residual-ahead': findResidualAhead,
  'published-table-breaks': findPublishedTableBreaks,
  'not-collected': findNotCollected,
  'elements-old': findElementsOld,
  'publication-failed': findPublicationFailed,
  'decision-due': findDecisionDue,
  'station-refused': findStationRefused,
  'server-silent': findServerSilent,
  'web-hook-failing': findWebHookFailing,
  'auto-use-declined': findAutoUseDeclined,
  'slots-missed': findSlotsMissed,
}
export const allKinds = Object.keys(finders) as AlertKind[]

/** What calls for a person at this moment, in a fixed order: two servers that write alerts at once never wait for each other in a ring. */
export async function findCauses(deps: Pick<Deps, 'db' | 'now'>, scope: CauseScope = {}): Promise<Cause[]> {
  const found: Cause[] = []
  for (const kind of scope.kinds ?? allKinds) found.push(...await finders[kind]?.(deps, scope) ?? [])
  return found.sort((one, other) => one.cause < other.cause ? -1 : one.cause > other.cause ? 1 : 0)
}
