/** Colours of every chart, by meaning. They are CSS variables: a change of theme repaints without a script. */
export const chartColours = {
  needed: 'var(--chart-needed)',
  set: 'var(--chart-set)',
  edge: 'var(--chart-edge)',
  band: 'var(--chart-band)',
  grid: 'var(--chart-grid)',
  ink: 'var(--ink)',
  outside: 'var(--sunk)',
  quiet: 'var(--edge)',
  workable: 'var(--accent-wash)',
} as const
