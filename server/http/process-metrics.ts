import type { MetricFamily } from '~~/server/domain/metrics/family'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'

/** Under the names that exporters of processes commonly give. */
export function processMetrics(): MetricFamily[] {
  const { user, system } = process.cpuUsage()
  const gauge = (name: string, help: string, value: number): MetricFamily => ({ name, help, type: 'gauge', samples: [{ value }] })
  return [
    { name: 'process_cpu_seconds_total', help: 'CPU time of this process, user and system.', type: 'counter', samples: [{ value: (user + system) / 1e6 }] },
    gauge('process_resident_memory_bytes', 'Memory of this process that is resident.', process.memoryUsage.rss()),
    gauge('process_start_time_seconds', 'When this process started, in seconds since 1970 UTC.', Math.round(Date.now() / 1000 - process.uptime())),
    gauge('nullbeat_schedule_last_wake_seconds', 'When this process’s schedule last woke, in seconds since 1970 UTC; 0: not yet.', Math.round(lifecycle.schedulerBeatAt / 1000)),
  ]
}
