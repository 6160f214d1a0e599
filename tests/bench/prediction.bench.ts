import { spawnSync } from 'node:child_process'
import { fileURLToPath } from 'node:url'
import { isMainThread, parentPort, Worker, workerData } from 'node:worker_threads'
import type { MeanElements } from '#shared/physics/types'
import { directPair } from './direct'
import { budget, fleetOf, FROM_MS, stationsOf } from './fleet'
import { dayOfOne, processorMs } from './job'

/**
 * How fast prediction is, as ratios within one run, since seconds depend on the machine. The reference does the same plainly: SGP4
 * at every sample. Both take turns, spacecraft by spacecraft, and are measured in processor time, so that what else
 * the machine does counts little; only two workers against one is by the clock.
 *
 * A scaled job by default; `--full` runs 100 spacecraft × 20 stations × 24 h.
 */
const isFull = process.argv.includes('--full')
const toMs = FROM_MS + 86_400_000
const self = fileURLToPath(import.meta.url)
const spacecraft = isFull ? 100 : 16
const stations = 20

if (!isMainThread) {
  const { fleet } = workerData as { fleet: MeanElements[] }
  for (const elements of fleet) dayOfOne(elements, stationsOf(stations), toMs, true, () => {})
  parentPort!.postMessage('done')
}
else if (process.argv.includes('--job')) {
  for (const elements of fleetOf(spacecraft)) dayOfOne(elements, stationsOf(stations), toMs, true, () => {})
  console.log(process.resourceUsage().maxRSS / 1024)
}
else await report()

async function report(): Promise<void> {
  const beganMs = performance.now()
  const sites = stationsOf(stations)
  const fleet = fleetOf(spacecraft)
  // Both are compiled before they are measured.
  for (const [i, elements] of fleetOf(12).entries()) {
    if (i < 2) for (const site of sites) directPair(elements, site, toMs, budget.ut1MinusUtcS, { propagations: 0, passes: 0, rows: 0 }, () => {})
    dayOfOne(elements, sites, toMs, i < 3, () => {})
  }

  const direct = { ms: 0, propagations: 0, passes: 0, rows: 0, sum: 0 }
  const own = { predictMs: 0, tablesMs: 0, propagations: 0, passes: 0, rows: 0, tables: 0, sum: 0 }
  for (const elements of fleet) {
    const startedMs = processorMs()
    for (const site of sites) {
      directPair(elements, site, toMs, budget.ut1MinusUtcS, direct, (_at, azimuth, elevation, range, rate, hz) => {
        direct.sum += azimuth + elevation + range + rate + hz
      })
    }
    direct.ms += processorMs() - startedMs
    const curves = dayOfOne(elements, sites, toMs, false, (row) => {
      own.sum += row[1]! + row[2]! + row[3]! + row[4]! + row[5]!
    })
    own.predictMs += curves.predictMs
    own.propagations += curves.propagations
    own.passes += curves.passes
    own.rows += curves.rows
    const { tablesMs, tables } = dayOfOne(elements, sites, toMs, true, () => {})
    own.tablesMs += tablesMs
    own.tables += tables
  }
  const agreement = agreementOf(fleet[0]!)
  const rss = Number(spawnSync(process.execPath, [self, '--job', ...(isFull ? ['--full'] : [])], { encoding: 'utf8' }).stdout)
  // The quickest of several rounds counts: the rest is what else the machine did.
  const workers = { one: Infinity, two: Infinity }
  for (let round = 0; round < 3; round++) {
    workers.one = Math.min(workers.one, await byWorkers(fleet.slice(0, 16), 1))
    workers.two = Math.min(workers.two, await byWorkers(fleet.slice(0, 16), 2))
  }
  const growth = growthOf()

  console.log(`
Prediction: ${spacecraft} spacecraft × ${stations} stations × 24 h, every pass above 5°, a row a second${isFull ? '' : ' (scaled; all of it with --full)'}
  plainly      ${direct.passes} passes, ${direct.rows} rows, ${direct.propagations} times SGP4
  the product  ${own.passes} passes, ${own.rows} rows, ${own.propagations} times SGP4, ${own.tables} tables
  they agree   within ${agreement.hz.toFixed(4)} Hz at 437.5 MHz, ${agreement.deg.toExponential(1)}°, ${agreement.m.toFixed(3)} m over ${agreement.rows} rows, AOS to the millisecond
`)
  const lines: Line[] = [
    ['passes and curves, over the plain way', own.predictMs / direct.ms, '≤', 0.25],
    ['planning and checking, over the predicting', own.tablesMs / own.predictMs, '≤', 1.5],
    ['memory of the job, MB', rss, '<', 300],
    ['two workers, over one', workers.one / workers.two, '≥', 1.4],
    ['a spacecraft of 100, over one of 10', growth[1]!, '≤', 1.25],
    ['a spacecraft of 1,000, over one of 10', growth[2]!, '≤', 1.25],
  ]
  console.log(tableOf(lines))
  console.log(`\nTook ${Math.round((performance.now() - beganMs) / 1000)} s.`)
}

type Line = readonly [what: string, ratio: number, relation: '≤' | '<' | '≥', aim: number]

function tableOf(lines: readonly Line[]): string {
  const met = ([, ratio, relation, aim]: Line): boolean => relation === '≥' ? ratio >= aim : relation === '<' ? ratio < aim : ratio <= aim
  const rows = lines.map(line => [line[0], line[1].toFixed(line[3] >= 100 ? 0 : 2), `${line[2]} ${line[3]}`, met(line) ? 'met' : 'not met'])
  const all = [['what', 'ratio', 'aim', ''], ...rows]
  const widths = [0, 1, 2].map(k => Math.max(...all.map(row => row[k]!.length)))
  return all.map(row => `${row[0]!.padEnd(widths[0]!)}  ${row[1]!.padStart(widths[1]!)}  ${row[2]!.padStart(widths[2]!)}  ${row[3]}`.trimEnd()).join('\n')
}

/** Largest differences of one spacecraft's rows, taken at the same instants: the plain way's are moved to the product's AOS. */
function agreementOf(elements: MeanElements): { hz: number, deg: number, m: number, rows: number } {
  const worst = { hz: 0, deg: 0, m: 0, rows: 0 }
  for (const site of stationsOf(stations)) {
    const plain = new Map<number, readonly number[]>()
    directPair(elements, site, toMs, budget.ut1MinusUtcS, { propagations: 0, passes: 0, rows: 0 }, (atMs, ...row) => plain.set(atMs, row))
    const times = [...plain.keys()]
    let k = 0
    dayOfOne(elements, [site], toMs, false, ([atMs, , elevation, range, rate, hz]) => {
      while (k < times.length && times[k]! < atMs! - 2) k++
      if (k === times.length || Math.abs(times[k]! - atMs!) > 2) return
      // A millisecond of AOS apart at most: what moves in it is taken off by the range rate.
      const row = plain.get(times[k]!)!
      const apartS = (atMs! - times[k]!) / 1000
      worst.m = Math.max(worst.m, Math.abs(range! - row[2]! - rate! * apartS))
      worst.deg = Math.max(worst.deg, Math.abs(elevation! - row[1]!) * 180 / Math.PI)
      worst.hz = Math.max(worst.hz, Math.abs(hz! - row[4]!))
      worst.rows++
    })
  }
  return worst
}

/** Time for a fleet shared out to `count` worker threads, ms. */
async function byWorkers(fleet: readonly MeanElements[], count: number): Promise<number> {
  const startedMs = performance.now()
  await Promise.all(Array.from({ length: count }, (_, k) => new Promise<void>((resolve, reject) => {
    const worker = new Worker(self, { workerData: { fleet: fleet.filter((_, i) => i % count === k) } })
    worker.once('message', () => resolve())
    worker.once('error', reject)
  })))
  return performance.now() - startedMs
}

/** Time a spacecraft takes in fleets of 10, 100 and 1,000, over what it takes among 10. */
function growthOf(): number[] {
  const sites = stationsOf(isFull ? stations : 3)
  const each = [10, 100, 1000].map((count) => {
    const fleet = fleetOf(count)
    let leastMs = Infinity
    for (let done = 0; done < 300; done += count) {
      const startedMs = processorMs()
      for (const elements of fleet) dayOfOne(elements, sites, toMs, false, () => {})
      leastMs = Math.min(leastMs, processorMs() - startedMs)
    }
    return leastMs / count
  })
  return each.map(ms => ms / each[0]!)
}
