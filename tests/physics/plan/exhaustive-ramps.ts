/** A problem with ramps small enough to try every plan; first row at 0, every number as the planner is given it. */
export interface SmallRamps {
  readonly timeMs: readonly number[]
  readonly offsetHz: readonly number[]
  readonly halfWidthHz: readonly number[]
  readonly beginsPart: readonly boolean[]
  readonly stepHz: number
  readonly slopeStepHzPerS: number
  readonly mostSlope: number
  readonly dwell: number
  readonly quiet: readonly (readonly [number, number])[]
  readonly jumpHz: number
}
interface Rows { readonly starts: readonly number[], readonly settings: readonly number[], readonly slopes: readonly number[] }

/** Fewest rows by trying every start, setting and slope; null where none of up to `mostRows` serves. Jumps are not looked at. */
export function fewestByTryingAll(p: SmallRamps, mostRows: number): number | null {
  const last = Math.ceil(p.timeMs[p.timeMs.length - 1]!)
  const ends = [...Array.from({ length: last }, (_, i) => i + 1).filter(time => time < last && !isQuiet(p, time)), Infinity]
  let starts = [0]
  for (let rows = 1; rows <= mostRows; rows++) {
    const next = new Set<number>()
    for (const start of starts) {
      for (const end of ends) {
        if (end < start + p.dwell || !someLineServes(p, start, end)) continue
        if (end === Infinity) return rows
        next.add(end)
      }
    }
    starts = [...next]
  }
  return null
}

/** The same with jumps: a row begins within `jumpHz` of where one before it has come to, while something listens. */
export function fewestWithJumps(p: SmallRamps, mostRows: number): number | null {
  const last = Math.ceil(p.timeMs[p.timeMs.length - 1]!)
  const ends = [...Array.from({ length: last }, (_, i) => i + 1).filter(time => time < last && !isQuiet(p, time)), Infinity]
  const middle = Math.round(p.offsetHz[0]! / p.stepHz)
  /** By start: where rows before have come to. */
  let reached = new Map<number, Set<number>>([[0, new Set()]])
  for (let rows = 1; rows <= mostRows; rows++) {
    const next = new Map<number, Set<number>>()
    for (const [start, values] of reached) {
      const isFree = rows === 1 || neededAt(p, start) === null
      for (let slope = -p.mostSlope; slope <= p.mostSlope; slope++) {
        for (let setting = middle - 60; setting <= middle + 60; setting++) {
          if (!isFree && ![...values].some(value => Math.abs(setting * p.stepHz - value) <= p.jumpHz + 1e-6)) continue
          for (const end of ends) {
            if (end <= start) continue
            if (!serves(p, start, end, setting, slope)) break
            if (end === Infinity) return rows
            if (end < start + p.dwell) continue
            if (!next.has(end)) next.set(end, new Set())
            next.get(end)!.add(setAt(p, start, setting, slope, end))
          }
        }
      }
    }
    reached = next
  }
  return null
}

function someLineServes(p: SmallRamps, start: number, end: number): boolean {
  const middle = Math.round(p.offsetHz[0]! / p.stepHz)
  for (let slope = -p.mostSlope; slope <= p.mostSlope; slope++) {
    for (let setting = middle - 60; setting <= middle + 60; setting++) if (serves(p, start, end, setting, slope)) return true
  }
  return false
}

/** Whether rows serve, keep their dwell and jumps, and stay out of quiet stretches. */
export function rampFits(p: SmallRamps, { starts, settings, slopes }: Rows): boolean {
  return starts.every((start, i) => {
    const end = starts[i + 1] ?? Infinity
    if (!Number.isInteger(settings[i]) || !Number.isInteger(slopes[i]) || Math.abs(slopes[i]!) > p.mostSlope) return false
    if (!serves(p, start, end, settings[i]!, slopes[i]!)) return false
    if (i === 0) return start === 0
    const before = setAt(p, starts[i - 1]!, settings[i - 1]!, slopes[i - 1]!, start)
    const isJumpBorne = neededAt(p, start) === null || Math.abs(settings[i]! * p.stepHz - before) <= p.jumpHz + 1e-6
    return start >= starts[i - 1]! + p.dwell && !isQuiet(p, start) && isJumpBorne
  })
}

const isQuiet = (p: SmallRamps, time: number) => p.quiet.some(([from, to]) => time >= from && time <= to)
const setAt = (p: SmallRamps, start: number, setting: number, slope: number, time: number) =>
  setting * p.stepHz + slope * p.slopeStepHzPerS * (time - start) / 1000

/** Straight pieces and straight rows differ most at a knot or at an end. */
function serves(p: SmallRamps, start: number, end: number, setting: number, slope: number): boolean {
  for (const time of [start, end, ...p.timeMs]) {
    if (time < start || time > end) continue
    const at = neededAt(p, time)
    if (at && Math.abs(at[0] - setAt(p, start, setting, slope, time)) > at[1] + 1e-5) return false
  }
  return true
}

function neededAt(p: SmallRamps, time: number): [needed: number, half: number] | null {
  for (let j = 0; j < p.timeMs.length; j++) {
    if (p.timeMs[j] === time) return [p.offsetHz[j]!, p.halfWidthHz[j]!]
    if (j === 0 || p.beginsPart[j] || time < p.timeMs[j - 1]! || time > p.timeMs[j]!) continue
    const share = (time - p.timeMs[j - 1]!) / (p.timeMs[j]! - p.timeMs[j - 1]!)
    return [p.offsetHz[j - 1]! * (1 - share) + p.offsetHz[j]! * share, p.halfWidthHz[j - 1]! * (1 - share) + p.halfWidthHz[j]! * share]
  }
  return null
}
