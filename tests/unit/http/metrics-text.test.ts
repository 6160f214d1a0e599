import { describe, expect, it } from 'vitest'
import { writeMetrics } from '~~/server/http/metrics-text'
import { RequestMetrics } from '~~/server/http/request-metrics'
import { readExposition } from '../../support/exposition'

// Prometheus documentation, “Exposition formats”, text format 0.0.4; naming after “Metric and label naming”.
describe('the text of measurements', () => {
  it('is as the format’s own examples write it', () => {
    expect(writeMetrics([
      { name: 'http_requests_total', help: 'The total number of HTTP requests.', type: 'counter', samples: [{ labels: { method: 'post', code: '200' }, value: 1027 }, { labels: { method: 'post', code: '400' }, value: 3 }] },
      { name: 'msdos_file_access_time_seconds', help: 'Backslash \\ and\nline', type: 'gauge', samples: [{ labels: { path: 'C:\\DIR\\FILE.TXT', error: 'Cannot find file:\n"FILE.TXT"' }, value: 1.458255915e9 }, { value: Infinity }, { value: Number.NaN }] },
    ])).toBe(String.raw`# HELP http_requests_total The total number of HTTP requests.
# TYPE http_requests_total counter
http_requests_total{method="post",code="200"} 1027
http_requests_total{method="post",code="400"} 3
# HELP msdos_file_access_time_seconds Backslash \\ and\nline
# TYPE msdos_file_access_time_seconds gauge
msdos_file_access_time_seconds{path="C:\\DIR\\FILE.TXT",error="Cannot find file:\n\"FILE.TXT\""} 1458255915
msdos_file_access_time_seconds +Inf
msdos_file_access_time_seconds NaN
`)
  })

  it('counts requests in cumulative buckets with +Inf, sum and count, and keeps routes and methods few', () => {
    const metrics = new RequestMetrics()
    for (const seconds of [0.004, 0.02, 0.02, 3, 20]) metrics.count({ method: 'GET', route: '/api/tables', status: 200, seconds })
    metrics.count({ method: 'PROPFIND', route: 'page', status: null, seconds: 0.1 })
    const families = readExposition(writeMetrics(metrics.families()))
    expect(families.get('nullbeat_http_requests_total')!.samples).toEqual([
      { name: 'nullbeat_http_requests_total', labels: { method: 'GET', route: '/api/tables', status: '200' }, value: 5 },
      { name: 'nullbeat_http_requests_total', labels: { method: 'other', route: 'page', status: 'broken-off' }, value: 1 },
    ])
    const buckets = families.get('nullbeat_http_request_duration_seconds')!.samples.filter(({ labels }) => labels.route === '/api/tables')
    const valueAt = (le: string) => buckets.find(({ labels }) => labels.le === le)!.value
    expect([valueAt('0.005'), valueAt('0.025'), valueAt('2.5'), valueAt('5'), valueAt('10'), valueAt('+Inf')]).toEqual([1, 3, 3, 4, 4, 5])
    expect(buckets.find(({ name }) => name.endsWith('_count'))!.value).toBe(5)
    expect(buckets.find(({ name }) => name.endsWith('_sum'))!.value).toBeCloseTo(23.044, 9)
  })
})
