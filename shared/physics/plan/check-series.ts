/** A smooth function of time as Chebyshev series on panels. */
export interface Series {
  readonly valueAt: (utcMs: number) => number
  /** Per second. */
  readonly rateAt: (utcMs: number) => number
}

export interface SeriesOptions {
  readonly fromMs: number
  readonly toMs: number
  /** Longest panel to begin with. */
  readonly panelMs: number
  readonly nodes: number
  /** A panel is halved while its last two coefficients exceed this, unit of the function. */
  readonly tolerance: number
}

interface Panel { readonly middleMs: number, readonly halfMs: number, readonly value: Float64Array, readonly rate: Float64Array }

const SHORTEST_PANEL_MS = 250

/**
 * Interpolates `fn` at Chebyshev points, panels halved until the series has died out. Source: Press et al., Numerical Recipes,
 * chapter on Chebyshev approximation (coefficients, Clenshaw's recurrence, derivative). Outside [fromMs, toMs] the nearest
 * panel is continued, which is good for milliseconds only.
 *
 * @card Chebyshev series: a smooth curve by few samples.
 * @formula Σ c_k T_k(x) on each panel, by Clenshaw’s recurrence
 * @source Press et al., Numerical Recipes §5.8
 * @units any → any, per s
 * @frame none
 * @range smooth functions; panels of 250 ms at least
 * @tolerance 1e-8 on Runge’s function, 1e-6 per s in its slope (plan/check-series.test.ts)
 */
export function seriesOf(fn: (utcMs: number) => number, options: SeriesOptions): Series {
  const panels: Panel[] = []
  const count = Math.max(1, Math.ceil((options.toMs - options.fromMs) / options.panelMs))
  const length = (options.toMs - options.fromMs) / count
  for (let i = 0; i < count; i++) addPanels(fn, options, options.fromMs + length * i, options.fromMs + length * (i + 1), panels)
  const begins = Float64Array.from(panels, panel => panel.middleMs - panel.halfMs)
  let at = 0
  // Instants mostly come in order: the panel asked last is tried first.
  const panelAt = (utcMs: number): Panel => {
    if (!(utcMs >= begins[at]! && (at + 1 === panels.length || utcMs < begins[at + 1]!))) {
      let before = 0
      let after = panels.length
      while (after - before > 1) {
        const middle = (before + after) >> 1
        if (begins[middle]! <= utcMs) before = middle
        else after = middle
      }
      at = before
    }
    return panels[at]!
  }
  return {
    valueAt: (utcMs) => {
      const panel = panelAt(utcMs)
      return clenshaw(panel.value, (utcMs - panel.middleMs) / panel.halfMs)
    },
    rateAt: (utcMs) => {
      const panel = panelAt(utcMs)
      return clenshaw(panel.rate, (utcMs - panel.middleMs) / panel.halfMs)
    },
  }
}

function addPanels(fn: (utcMs: number) => number, options: SeriesOptions, fromMs: number, toMs: number, panels: Panel[]): void {
  const middleMs = (fromMs + toMs) / 2
  // A part of no length still gets a panel.
  const halfMs = Math.max((toMs - fromMs) / 2, 1)
  const value = coefficients(x => fn(middleMs + x * halfMs), options.nodes)
  const tail = Math.abs(value[options.nodes - 1]!) + Math.abs(value[options.nodes - 2]!)
  if (tail > options.tolerance && toMs - fromMs > SHORTEST_PANEL_MS) {
    addPanels(fn, options, fromMs, middleMs, panels)
    addPanels(fn, options, middleMs, toMs, panels)
    return
  }
  panels.push({ middleMs, halfMs, value, rate: derivative(value).map(c => c / (halfMs / 1000)) })
}

/** cos(πk(j + ½)/n), row k, for each number of points asked for so far. */
const cosines = new Map<number, Float64Array>()

function cosinesOf(n: number): Float64Array {
  let table = cosines.get(n)
  if (!table) cosines.set(n, table = Float64Array.from({ length: n * n }, (_, i) => Math.cos(Math.PI * Math.floor(i / n) * (i % n + 0.5) / n)))
  return table
}

/** Coefficients of the series through n Chebyshev points; the first already halved. */
function coefficients(fn: (x: number) => number, n: number): Float64Array {
  const table = cosinesOf(n)
  const samples = new Float64Array(n)
  for (let j = 0; j < n; j++) samples[j] = fn(table[n + j]!)
  const c = new Float64Array(n)
  for (let k = 0; k < n; k++) {
    let sum = 0
    for (let j = 0; j < n; j++) sum += samples[j]! * table[k * n + j]!
    c[k] = sum * (k === 0 ? 1 : 2) / n
  }
  return c
}

function derivative(c: Float64Array): Float64Array {
  const n = c.length
  const d = new Float64Array(n + 1)
  for (let k = n - 2; k >= 0; k--) d[k] = d[k + 2]! + 2 * (k + 1) * c[k + 1]!
  d[0] = d[0]! / 2
  return d.slice(0, n)
}

function clenshaw(c: Float64Array, x: number): number {
  let next = 0
  let afterNext = 0
  for (let k = c.length - 1; k >= 1; k--) {
    const own = 2 * x * next - afterNext + c[k]!
    afterNext = next
    next = own
  }
  return x * next - afterNext + c[0]!
}
