import type { EveningRule } from '#shared/publication-slots'
import { eveningInstants } from '#shared/publication-slots'
import type { ComingSlot } from '#shared/schemas/settings'
import { formatLocalTime } from '#shared/utils/format'
import type { Deps } from '../context'
import { countWouldPublish } from './would-publish'

export interface NamedPlan { readonly stationId: string, readonly linkId: string | null, readonly rule: EveningRule, readonly entity: string, readonly name: string }

const dayMs = 24 * 3600_000

/** Evening slots of some plans after now, each with what it would publish now: the passes until the plan's next evening. */
export async function comingEvenings(deps: Pick<Deps, 'db' | 'now'>, plans: readonly NamedPlan[], aheadMs: number): Promise<ComingSlot[]> {
  const from = deps.now.getTime() + 1
  const evenings = plans.flatMap((plan) => {
    const instants = eveningInstants(plan.rule, from, from + aheadMs + 3 * dayMs)
    return instants.flatMap((ms, i) => ms < from + aheadMs ? [{ plan, ms, nextMs: instants[i + 1]! }] : [])
  })
  const counts = await countWouldPublish(deps, evenings.map(({ plan, ms, nextMs }) => ({ stationId: plan.stationId, linkId: plan.linkId, from: new Date(ms), to: new Date(nextMs) })))
  return evenings.map(({ plan, ms }, i) => ({ kind: 'publish-night', entity: plan.entity, name: plan.name, at: new Date(ms).toISOString(), local: formatLocalTime(ms, plan.rule.zone), ...counts[i]! }))
}
