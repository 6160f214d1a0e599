import { spawnSync } from 'node:child_process'
import { once } from 'node:events'
import { fileURLToPath } from 'node:url'
import { isMainThread, parentPort, Worker } from 'node:worker_threads'
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
const ROUNDS = 3

if (!isMainThread) {
  parentPort!.on('message', (fleet: MeanElements[]) => {
    for (const elements of fleet) dayOfOne(elements, stationsOf(stations), toMs, true, () => {})
    parentPort!.postMessage('done')
  })
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
    dayOfOne(elements, sites, toMs, i < 8, () => {})
  }

  const direct = { ms: 0, propagations: 0, passes: 0, rows: 0, sum: 0 }
  const own = { predictMs: 0, tablesMs: 0, propagations: 0, passes: 0, rows: 0, tables: 0, sum: 0 }
  for (const elements of fleet) {
    // The quickest of several rounds each: caches and memory that other work at the machine takes away count little, too.
    const least = { direct: Infinity, predict: Infinity, tables: Infinity }
    for (let round = 0; round < ROUNDS; round++) {
      const isFirst = round === 0
      const count = isFirst ? direct : { propagations: 0, passes: 0, rows: 0 }
      const startedMs = processorMs()
      for (const site of sites) {
        directPair(elements, site, toMs, budget.ut1MinusUtcS, count, (_at, azimuth, elevation, range, rate, hz) => {
          direct.sum += azimuth + elevation + range + rate + hz
        })
      }
      least.direct = Math.min(least.direct, processorMs() - startedMs)
      const curves = dayOfOne(elements, sites, toMs, false, (row) => {
        own.sum += row[1]! + row[2]! + row[3]! + row[4]! + row[5]!
      })
      least.predict = Math.min(least.predict, curves.predictMs)
      const { tablesMs, tables } = dayOfOne(elements, sites, toMs, true, () => {})
      least.tables = Math.min(least.tables, tablesMs)
      if (!isFirst) continue
      own.propagations += curves.propagations
      own.passes += curves.passes
      own.rows += curves.rows
      own.tables += tables
    }
    direct.ms += least.direct
    own.predictMs += least.predict
    own.tablesMs += least.tables
  }
  const agreement = agreementOf(fleet[0]!)
  const rss = Number(spawnSync(process.execPath, [self, '--job', ...(isFull ? ['--full'] : [])], { encoding: 'utf8' }).stdout)
  const workers = await byWorkers(fleet.slice(0, 10))
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

/** Time for a fleet in one worker thread, and shared out to two, ms; threads that are warm, as the product's. The quickest of several rounds. */
async function byWorkers(fleet: readonly MeanElements[]): Promise<{ one: number, two: number }> {
  const threads = [new Worker(self), new Worker(self)]
  const timeOf = async (shares: readonly (readonly MeanElements[])[]): Promise<number> => {
    const startedMs = performance.now()
    await Promise.all(shares.map((share, k) => {
      const done = once(threads[k]!, 'message')
      threads[k]!.postMessage(share)
      return done
    }))
    return performance.now() - startedMs
  }
  const halves = [0, 1].map(k => fleet.filter((_, i) => i % 2 === k))
  const least = { one: Infinity, two: Infinity }
  await timeOf([fleet.slice(0, 3), fleet.slice(0, 3)])
  for (let round = 0; round < 4; round++) {
    least.one = Math.min(least.one, await timeOf([fleet]))
    least.two = Math.min(least.two, await timeOf(halves))
  }
  await Promise.all(threads.map(thread => thread.terminate()))
  return least
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
