import type { HistogramSample, MetricFamily, Sample } from '~~/server/domain/metrics/family'

/** Upper bounds in seconds. */
const bounds = [0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 5, 10]
const methods = new Set(['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE'])

export interface AnsweredRequest { method: string, /** The route's line, or what kind of address it was: never the address itself. */ route: string, /** null: broken off. */ status: number | null, seconds: number }

/** What this process has answered since it started. */
export class RequestMetrics {
  readonly #answered = new Map<string, { labels: Record<string, string>, count: number }>()
  readonly #durations = new Map<string, { labels: Record<string, string>, within: number[], sum: number, count: number }>()

  count({ method: given, route, status, seconds }: AnsweredRequest): void {
    const method = methods.has(given) ? given : 'other'
    const labels = { method, route, status: status === null ? 'broken-off' : String(status) }
    const answered = this.#answered.get(JSON.stringify(labels)) ?? { labels, count: 0 }
    answered.count += 1
    this.#answered.set(JSON.stringify(labels), answered)
    const key = JSON.stringify([method, route])
    const duration = this.#durations.get(key) ?? { labels: { method, route }, within: bounds.map(() => 0), sum: 0, count: 0 }
    bounds.forEach((bound, index) => {
      if (seconds <= bound) duration.within[index]! += 1
    })
    duration.sum += seconds
    duration.count += 1
    this.#durations.set(key, duration)
  }

  families(): MetricFamily[] {
    const answered: Sample[] = [...this.#answered.values()].map(({ labels, count }) => ({ labels, value: count }))
    const durations: HistogramSample[] = [...this.#durations.values()].map(({ labels, within, sum, count }) => ({ labels, buckets: within.map((inside, index) => ({ le: bounds[index]!, count: inside })), sum, count }))
    return [
      { name: 'nullbeat_http_requests_total', help: 'Requests answered by this process, by method, route and status.', type: 'counter', samples: answered },
      { name: 'nullbeat_http_request_duration_seconds', help: 'From a request’s arrival to the end of its answer.', type: 'histogram', samples: durations },
    ]
  }
}

export const requestMetrics = new RequestMetrics()
