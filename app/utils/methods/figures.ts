import { formatHz } from '#shared/utils/format'

const MINUS = '\u2212'

/** A small figure to two digits: 0.0012 as it is, below that with its power of ten. */
export function smallFigure(value: number): string {
  const size = Math.abs(value)
  if (size === 0) return '0'
  if (size >= 100) return formatHz(value)
  const shown = size < 1e-3 ? size.toExponential(1).replace('.0e', 'e').replace('e-', `e${MINUS}`) : String(Number(size.toPrecision(2)))
  return (value < 0 ? MINUS : '') + shown
}

export const toleranceFigure = (tolerance: number): string => tolerance === 0 ? 'exact' : `± ${smallFigure(tolerance)}`
