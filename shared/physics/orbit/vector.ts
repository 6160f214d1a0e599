/** Plain arithmetic on triples; the frame is the caller's. */
export type Triple = readonly [number, number, number]

export const dot = (a: Triple, b: Triple): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2]
export const norm = (a: Triple): number => Math.sqrt(dot(a, a))
export const minus = (a: Triple, b: Triple): Triple => [a[0] - b[0], a[1] - b[1], a[2] - b[2]]

/** Coordinates of the same arrow in axes turned by `angleRad` about z (counter-clockwise seen from +z). */
export function inAxesTurnedAboutZ(a: Triple, angleRad: number): Triple {
  const c = Math.cos(angleRad)
  const s = Math.sin(angleRad)
  return [c * a[0] + s * a[1], c * a[1] - s * a[0], a[2]]
}
