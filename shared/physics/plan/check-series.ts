/** Smooth functions of time as Chebyshev series on panels that they share. */
export interface Series {
  /** Of function `k`, the first when left out. */
  readonly valueAt: (utcMs: number, k?: number) => number
  /** Per second. */
  readonly rateAt: (utcMs: number, k?: number) => number
  /** Of all functions. */
  readonly valuesAt: (utcMs: number, into: Float64Array) => void
  /** Of the first two functions, and after them the rate of the first: in one go, as this is asked most. */
  readonly lookAt: (utcMs: number, into: Float64Array) => void
}

export interface SeriesOptions {
  readonly fromMs: number
  readonly toMs: number
  /** Longest panel to begin with. */
  readonly panelMs: number
  readonly nodes: number
  /** One a function: a panel is halved while the last two coefficients of any exceed its own, unit of the function. */
  readonly tolerances: readonly number[]
}

/** Writes the value of every function at an instant. */
export type Sampler = (utcMs: number, into: Float64Array) => void

interface Panel { readonly middleMs: number, readonly perMs: number, readonly values: readonly Float64Array[], readonly rates: (Float64Array | undefined)[] }

const SHORTEST_PANEL_MS = 250

/**
 * Interpolates what `sample` writes at Chebyshev points, panels halved until every series has died out. Source: Press et al.,
 * Numerical Recipes, chapter on Chebyshev approximation (coefficients, Clenshaw's recurrence, derivative). Outside [fromMs, toMs]
 * the nearest panel is continued, which is good for milliseconds only.
 *
 * @card Chebyshev series: smooth curves by few samples.
 * @formula Σ c_k T_k(x) on each panel, by Clenshaw’s recurrence
 * @source Press et al., Numerical Recipes §5.8
 * @units any → any, per s
 * @frame none
 * @range smooth functions; panels of 250 ms at least
 * @tolerance 1e-8 on Runge’s function, 1e-6 per s in its slope (plan/check-series.test.ts)
 */
export function seriesOf(sample: Sampler, options: SeriesOptions): Series {
  const panels: Panel[] = []
  const count = Math.max(1, Math.ceil((options.toMs - options.fromMs) / options.panelMs))
  const length = (options.toMs - options.fromMs) / count
  for (let i = 0; i < count; i++) addPanels(sample, options, options.fromMs + length * i, options.fromMs + length * (i + 1), panels)
  const begins = Float64Array.from(panels, panel => panel.middleMs - 1 / panel.perMs)
  let [panel, from, to] = [panels[0]!, -Infinity, panels.length > 1 ? begins[1]! : Infinity]
  // Instants mostly come in order: the panel asked last is tried first.
  const panelAt = (utcMs: number): Panel => {
    if (utcMs >= from && utcMs < to) return panel
    let before = 0
    let after = panels.length
    while (after - before > 1) {
      const middle = (before + after) >> 1
      if (begins[middle]! <= utcMs) before = middle
      else after = middle
    }
    panel = panels[before]!
    from = before === 0 ? -Infinity : begins[before]!
    to = before + 1 === panels.length ? Infinity : begins[before + 1]!
    return panel
  }
  return {
    valueAt: (utcMs, k = 0) => {
      const { values, middleMs, perMs } = panelAt(utcMs)
      return clenshaw(values[k]!, (utcMs - middleMs) * perMs)
    },
    rateAt: (utcMs, k = 0) => {
      const { values, rates, middleMs, perMs } = panelAt(utcMs)
      return clenshaw(rates[k] ??= derivative(values[k]!, 1000 * perMs), (utcMs - middleMs) * perMs)
    },
    valuesAt: (utcMs, into) => {
      const { values, middleMs, perMs } = panelAt(utcMs)
      const x = (utcMs - middleMs) * perMs
      for (let k = 0; k < values.length; k++) into[k] = clenshaw(values[k]!, x)
    },
    lookAt: (utcMs, into) => {
      const { values, rates, middleMs, perMs } = panelAt(utcMs)
      const x = (utcMs - middleMs) * perMs
      const own = values[0]!
      const other = values[1]!
      const rate = rates[0] ??= derivative(own, 1000 * perMs)
      const twice = 2 * x
      let a = 0
      let b = 0
      let c = 0
      let beforeA = 0
      let beforeB = 0
      let beforeC = 0
      for (let k = own.length - 1; k >= 1; k--) {
        const nextA = twice * a + (own[k]! - beforeA)
        beforeA = a
        a = nextA
        const nextB = twice * b + (other[k]! - beforeB)
        beforeB = b
        b = nextB
        const nextC = twice * c + (rate[k]! - beforeC)
        beforeC = c
        c = nextC
      }
      into[0] = x * a + (own[0]! - beforeA)
      into[1] = x * b + (other[0]! - beforeB)
      into[2] = x * c + (rate[0]! - beforeC)
    },
  }
}

function addPanels(sample: Sampler, options: SeriesOptions, fromMs: number, toMs: number, panels: Panel[]): void {
  const { nodes, tolerances } = options
  const middleMs = (fromMs + toMs) / 2
  // A part of no length still gets a panel.
  const halfMs = Math.max((toMs - fromMs) / 2, 1)
  const values = coefficients((x, into) => sample(middleMs + x * halfMs, into), nodes, tolerances.length)
  const isRough = values.some((c, k) => Math.abs(c[nodes - 1]!) + Math.abs(c[nodes - 2]!) > tolerances[k]!)
  if (isRough && toMs - fromMs > SHORTEST_PANEL_MS) {
    addPanels(sample, options, fromMs, middleMs, panels)
    addPanels(sample, options, middleMs, toMs, panels)
    return
  }
  panels.push({ middleMs, perMs: 1 / halfMs, values, rates: [] })
}

/** cos(πk(j + ½)/n), row k, for each number of points asked for so far. */
const cosines = new Map<number, Float64Array>()

function cosinesOf(n: number): Float64Array {
  let table = cosines.get(n)
  if (!table) cosines.set(n, table = Float64Array.from({ length: n * n }, (_, i) => Math.cos(Math.PI * Math.floor(i / n) * (i % n + 0.5) / n)))
  return table
}

/** Coefficients of `count` series through n Chebyshev points; the first of each already halved. */
function coefficients(sample: Sampler, n: number, count: number): Float64Array[] {
  const table = cosinesOf(n)
  const samples = new Float64Array(n * count)
  const at = new Float64Array(count)
  for (let j = 0; j < n; j++) {
    sample(table[n + j]!, at)
    for (let k = 0; k < count; k++) samples[k * n + j] = at[k]!
  }
  const all: Float64Array[] = []
  for (let first = 0; first < n * count; first += n) {
    const c = new Float64Array(n)
    for (let k = 0; k < n; k++) {
      let sum = 0
      for (let j = 0; j < n; j++) sum += samples[first + j]! * table[k * n + j]!
      c[k] = sum * (k === 0 ? 1 : 2) / n
    }
    all.push(c)
  }
  return all
}

/** Coefficients of the slope, times `scale`. */
function derivative(c: Float64Array, scale: number): Float64Array {
  const n = c.length
  const d = new Float64Array(n + 1)
  for (let k = n - 2; k >= 0; k--) d[k] = d[k + 2]! + 2 * (k + 1) * c[k + 1]! * scale
  d[0] = d[0]! / 2
  return d.subarray(0, n)
}

function clenshaw(c: Float64Array, x: number): number {
  const twice = 2 * x
  let next = 0
  let afterNext = 0
  for (let k = c.length - 1; k >= 1; k--) {
    const own = twice * next + (c[k]! - afterNext)
    afterNext = next
    next = own
  }
  return x * next + (c[0]! - afterNext)
}
