import type { Deps } from '../context'
import { findDueLeads } from './publish-lead'
import { findDueEvenings } from './evenings'

/** How many slots are due and not done: zero but for the seconds until the next wake. */
export async function countDueSlots(deps: Pick<Deps, 'db' | 'now'>): Promise<number> {
  return (await findDueLeads(deps)).length + (await findDueEvenings(deps)).length
}
