/** A point in the data's own units: time in milliseconds, value in whatever the axis shows. */
export interface Point { readonly t: number, readonly y: number }
export interface Scales { x(t: number): number, y(value: number): number }

const at = ({ x, y }: Scales, point: Point) => `${x(point.t).toFixed(2)} ${y(point.y).toFixed(2)}`

/** SVG path of a line through the points; empty for fewer than two. */
export function linePath(points: readonly Point[], scales: Scales): string {
  return points.length < 2 ? '' : `M${points.map(point => at(scales, point)).join('L')}`
}

/** SVG path of the closed area between two lines over the same times. */
export function bandPath(upper: readonly Point[], lower: readonly Point[], scales: Scales): string {
  return upper.length < 2 ? '' : `M${[...upper, ...[...lower].reverse()].map(point => at(scales, point)).join('L')}Z`
}
