/** A planning problem small enough to try every plan: the planner's own curve is used as data, none of its code. */
export interface SmallProblem {
  readonly timeMs: readonly number[]
  readonly offsetHz: readonly number[]
  readonly halfWidthHz: readonly number[]
  readonly beginsPart: readonly boolean[]
  readonly stepHz: number
  readonly least: number
  readonly most: number
  readonly dwell: number
  readonly jump: number
  readonly notBefore: number
  /** Closed stretches in which no row begins. */
  readonly quiet: readonly (readonly [number, number])[]
}
/** Ratios count in steps of this, rounded up: nobody hears less than 0.012 % of a half-width. */
export const RATIO_STEPS = 8192
/** Hertz by which a setting may stand beyond the half-width, as rounding. */
const SLACK_HZ = 1e-6

export interface SmallPlan { readonly starts: number[], readonly settings: number[], readonly ratio: number }

/**
 * Tries every plan of up to `mostRows` rows and returns the best by the published order: fewest rows, least worst ratio in
 * steps of 1/8192, earliest starts, lowest settings; null where none of that many rows serves. A straight piece is worst at a knot or at a retune.
 */
export function bestByTryingAll(problem: SmallProblem, mostRows: number): SmallPlan | null {
  for (let rows = 1; rows <= mostRows; rows++) {
    let best: SmallPlan | null = null
    const visit = (starts: number[], settings: number[], ratio: number) => {
      const end = starts.length === rows
      const last = Math.ceil(problem.timeMs[problem.timeMs.length - 1]!)
      const start = starts[starts.length - 1]!
      const setting = settings[settings.length - 1]!
      if (end) {
        const worst = Math.max(ratio, worstRatio(problem, start, last, setting))
        if (worst <= 1 + 1e-9 && (best === null || isBetter({ starts, settings, ratio: worst }, best))) best = { starts, settings, ratio: worst }
        return
      }
      for (let next = start + 1; next < last; next++) {
        const worst = Math.max(ratio, worstRatio(problem, start, next, setting))
        if (worst > 1 + 1e-9) break
        const free = starts.length === 1 ? problem.notBefore : start
        if (next - free < problem.dwell || isQuiet(problem, next)) continue
        for (let other = problem.least; other <= problem.most; other++) {
          if (workable(problem, next) && Math.abs(other - setting) > problem.jump) continue
          visit([...starts, next], [...settings, other], worst)
        }
      }
    }
    for (let setting = problem.least; setting <= problem.most; setting++) visit([Math.floor(problem.timeMs[0]!)], [setting], 0)
    if (best !== null) {
      const found = best as SmallPlan
      if (rows > 1) found.starts[0] = Math.min(found.starts[0]!, found.starts[1]! - problem.dwell)
      while (isQuiet(problem, found.starts[0]!)) found.starts[0]!--
      return found
    }
  }
  return null
}

/** Largest |needed − set|/half-width over the workable instants of [from, to]. */
export function worstRatio(p: SmallProblem, from: number, to: number, setting: number): number {
  let worst = 0
  const include = (needed: number, half: number) => {
    worst = Math.max(worst, (Math.abs(needed - setting * p.stepHz) - SLACK_HZ) / half)
  }
  const knots = p.timeMs.filter(time => time >= from && time <= to)
  for (const time of [from, to, ...knots]) {
    const at = valueAt(p, time)
    if (at) include(at[0], at[1])
  }
  return worst
}

const isQuiet = (p: SmallProblem, time: number) => p.quiet.some(([from, to]) => time >= from && time <= to)

function workable(p: SmallProblem, time: number): boolean {
  return valueAt(p, time) !== null
}

function valueAt(p: SmallProblem, time: number): [number, number] | null {
  for (let j = 0; j < p.timeMs.length; j++) {
    if (p.timeMs[j] === time) return [p.offsetHz[j]!, p.halfWidthHz[j]!]
    if (j === 0 || p.beginsPart[j] || time < p.timeMs[j - 1]! || time > p.timeMs[j]!) continue
    const share = (time - p.timeMs[j - 1]!) / (p.timeMs[j]! - p.timeMs[j - 1]!)
    return [p.offsetHz[j - 1]! * (1 - share) + p.offsetHz[j]! * share, p.halfWidthHz[j - 1]! * (1 - share) + p.halfWidthHz[j]! * share]
  }
  return null
}

function isBetter(a: SmallPlan, b: SmallPlan): boolean {
  const [stepsOfA, stepsOfB] = [ratioSteps(a.ratio), ratioSteps(b.ratio)]
  if (stepsOfA !== stepsOfB) return stepsOfA < stepsOfB
  for (let i = 0; i < a.starts.length; i++) if (a.starts[i] !== b.starts[i]) return a.starts[i]! < b.starts[i]!
  for (let i = 0; i < a.settings.length; i++) if (a.settings[i] !== b.settings[i]) return a.settings[i]! < b.settings[i]!
  return false
}

export const ratioSteps = (ratio: number): number => Math.ceil(ratio * RATIO_STEPS)
