import type { Deps } from '../context'
import { scheduleActor } from '../context'
import { reconcileAlerts } from '../alerts/reconcile-alerts'
import { requestAutoUse } from '../elements/auto-use'
import { findDueUses, runScheduledUse } from '../elements/run-scheduled-uses'
import { lapseDue } from '../tables/lapse-due'
import { lifecycle } from './lifecycle'
import { findDueLeads, publishLead } from './publish-lead'
import { findDueEvenings } from './evenings'
import { beginWake, reportOutage } from './outage'
import { publishNight } from './publish-night'
import { recordMissedLeads } from './missed-leads'
import { rollForward } from './roll-forward'
import { sendDigest } from './send-digest'

export interface WakeOptions {
  /** Alerts are looked at once a minute, not at every wake. */
  withAlerts: boolean
  /** One thing that fails stops none of the others. */
  onError: (part: string, error: unknown) => void
}

/** Does what is due by the clock that it is handed: the database's. Idempotent, and safe on several servers at once. */
export async function wake({ db, now }: Pick<Deps, 'db' | 'now'>, { withAlerts, onError }: WakeOptions): Promise<void> {
  const deps: Deps = { db, now, actor: scheduleActor }
  const attempt = async (part: string, act: () => Promise<unknown>) => {
    // What is due stays due: the next server, or the next start, does it.
    if (lifecycle.stopping) return
    try {
      await act()
    }
    catch (error) {
      onError(part, error)
    }
    // Much to catch up is no standstill.
    lifecycle.schedulerBeatAt = Date.now()
  }
  await attempt('note the wake', () => beginWake(deps))
  await attempt('element sets scheduled for use', async () => {
    for (const due of await findDueUses(deps)) await attempt(`put set ${due.id} into use`, () => runScheduledUse(deps, due))
  })
  await attempt('rules for plausible sets', () => requestAutoUse(deps))
  await attempt('publish before passes', async () => {
    for (const lead of await findDueLeads(deps)) await attempt(`publish table ${lead.tableId}`, () => publishLead(deps, lead))
  })
  await attempt('publish evenings', async () => {
    for (const evening of await findDueEvenings(deps)) await attempt(`publish the evening of ${evening.station.name}`, () => publishNight(deps, evening))
  })
  await attempt('record slots before passes that were missed', () => recordMissedLeads(deps))
  await attempt('lapse', () => lapseDue(deps))
  await attempt('digest', () => sendDigest(deps))
  await attempt('roll forward', () => rollForward(deps))
  await attempt('report an outage', () => reportOutage(deps))
  if (withAlerts) await attempt('alerts', () => reconcileAlerts(deps))
}
