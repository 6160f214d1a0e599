import type { SQL } from 'drizzle-orm'
import { sql } from 'drizzle-orm'
import { tableStates } from '~~/server/database/schema'
import { queues } from '~~/server/jobs/queues.mjs'
import type { Deps } from '../context'
import { countDueSlots } from '../schedule/count-due-slots'
import { silentAfterMs } from '../servers/server-times'
import type { MetricFamily, Sample } from './family'

type Labels = Record<string, string>

/** What stands in the database, the same whichever server is asked. States that nothing is in are told as 0. */
export async function readMetrics({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<MetricFamily[]> {
  const count = async (labels: readonly Labels[], query: SQL): Promise<Sample[]> => {
    const { rows } = await db.execute<Labels & { value: number }>(query)
    return labels.map(wanted => ({ labels: wanted, value: rows.find(row => Object.entries(wanted).every(([label, text]) => row[label] === text))?.value ?? 0 }))
  }
  const by = (label: string, values: readonly string[]): Labels[] => values.map(value => ({ [label]: value }))
  const gauge = (name: string, help: string, samples: Sample[]): MetricFamily => ({ name: `nullbeat_${name}`, help, type: 'gauge', samples })

  const jobStates = ['waiting', 'active', 'retry', 'failed']
  const jobs = await count(Object.keys(queues).flatMap(queue => jobStates.map(state => ({ queue, state }))), sql`
    SELECT name AS queue, CASE state WHEN 'created' THEN 'waiting' ELSE state::text END AS state, count(*)::int AS value FROM pgboss.job WHERE state IN ('created','active','retry','failed') GROUP BY 1, 2`)
  const late = await db.execute<{ value: number }>(sql`SELECT count(*)::int AS value FROM slots WHERE done_at > ${now.toISOString()}::timestamptz - interval '24 hours' AND done_at - instant > interval '60 seconds' AND kind <> 'roll-forward'`)
  const backlog = jobs.filter(({ labels }) => labels!.queue === 'predict' && labels!.state !== 'failed').reduce((sum, { value }) => sum + value, 0)
  return [
    gauge('jobs', 'Jobs in the queue, by queue and state.', jobs),
    gauge('predictions_waiting', 'Predictions that wait or are being computed.', [{ value: backlog }]),
    gauge('slots_due', 'Slots of the schedule that are due and not done.', [{ value: await countDueSlots({ db, now }) }]),
    gauge('slots_late', 'Slots of the last 24 hours that were done more than a minute late.', [{ value: late.rows[0]!.value }]),
    gauge('alerts', 'Alerts that are not closed, by severity and state.', await count(['call', 'notice'].flatMap(severity => ['open', 'acknowledged'].map(state => ({ severity, state }))), sql`
      SELECT severity, state, count(*)::int AS value FROM alerts WHERE state <> 'closed' GROUP BY 1, 2`)),
    gauge('mails', 'Mails that wait or have failed.', await count(by('state', ['queued', 'failed']), sql`SELECT state, count(*)::int AS value FROM mails WHERE state <> 'sent' GROUP BY 1`)),
    gauge('web_hook_deliveries', 'Messages to web hooks that wait or were given up.', await count(by('state', ['queued', 'failed']), sql`SELECT state, count(*)::int AS value FROM web_hook_deliveries WHERE state <> 'delivered' GROUP BY 1`)),
    gauge('table_revisions', 'Revisions of tables of passes that are not over, by state.', await count(by('state', tableStates), sql`
      SELECT r.state, count(*)::int AS value FROM table_revisions r JOIN tables t ON t.id = r.table_id JOIN passes p ON p.id = t.pass_id
      WHERE p.los > ${now.toISOString()}::timestamptz AND p.gone_at IS NULL GROUP BY 1`)),
    gauge('uploads', 'Uploads of element sets, by state.', await count(by('state', ['receiving', 'reading', 'finished', 'cancelled', 'failed']), sql`SELECT state, count(*)::int AS value FROM element_uploads GROUP BY 1`)),
    gauge('servers', 'Processes on this database, by role and state.', await count(['server', 'worker'].flatMap(role => ['alive', 'silent'].map(state => ({ role, state }))), sql`
      SELECT role, CASE WHEN seen_at < clock_timestamp() - make_interval(secs => ${silentAfterMs / 1000}) THEN 'silent' ELSE 'alive' END AS state, count(*)::int AS value FROM servers WHERE stopped_at IS NULL GROUP BY 1, 2`)),
  ]
}
