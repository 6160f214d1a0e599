import type { MetricFamily } from '~~/server/domain/metrics/family'

export const metricsType = 'text/plain; version=0.0.4; charset=utf-8'

/** Prometheus' text exposition format, version 0.0.4: one HELP and one TYPE line a family, then its samples. */
export function writeMetrics(families: readonly MetricFamily[]): string {
  return families.map(family => `# HELP ${family.name} ${escapeHelp(family.help)}\n# TYPE ${family.name} ${family.type}\n${linesOf(family).map(line => `${line}\n`).join('')}`).join('')
}

function linesOf(family: MetricFamily): string[] {
  if (family.type !== 'histogram') return family.samples.map(({ labels, value }) => line(family.name, labels, value))
  return family.samples.flatMap(({ labels, buckets, sum, count }) => [
    ...buckets.map(({ le, count: within }) => line(`${family.name}_bucket`, { ...labels, le: numberText(le) }, within)),
    line(`${family.name}_bucket`, { ...labels, le: '+Inf' }, count),
    line(`${family.name}_sum`, labels, sum),
    line(`${family.name}_count`, labels, count),
  ])
}

function line(name: string, labels: Record<string, string> = {}, value: number): string {
  const pairs = Object.entries(labels).map(([label, text]) => `${label}="${escapeLabel(text)}"`)
  return `${name}${pairs.length > 0 ? `{${pairs.join(',')}}` : ''} ${numberText(value)}`
}

const numberText = (value: number) => Number.isNaN(value) ? 'NaN' : value === Infinity ? '+Inf' : value === -Infinity ? '-Inf' : String(value)
const escapeHelp = (text: string) => text.replaceAll('\\', '\\\\').replaceAll('\n', '\\n')
const escapeLabel = (text: string) => escapeHelp(text).replaceAll('"', '\\"')
