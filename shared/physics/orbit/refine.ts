export type FunctionOfTime = (utcMs: number) => number

const GOLDEN = (3 - Math.sqrt(5)) / 2

/**
 * Where `f` changes sign between `a` and `b`, within `toleranceMs`: false position with Illinois' halving, bisection
 * whenever that is slow (Dowell, Jarratt 1971). Where both ends have one sign (rounding), the end nearer to zero.
 */
export function findRoot(f: FunctionOfTime, a: number, b: number, toleranceMs: number): number {
  let [left, right] = [a, b]
  let [atLeft, atRight] = [f(a), f(b)]
  if (atLeft === 0) return a
  if (atRight === 0) return b
  if (Math.sign(atLeft) === Math.sign(atRight)) return Math.abs(atLeft) < Math.abs(atRight) ? a : b
  // Values may be halved by Illinois' rule; signs stay true.
  for (let round = 0; right - left > toleranceMs && round < 200; round++) {
    const byLine = left + (right - left) * atLeft / (atLeft - atRight)
    const inside = Math.min(Math.max(byLine, left + toleranceMs / 3), right - toleranceMs / 3)
    const middle = round % 3 === 2 ? (left + right) / 2 : inside
    const value = f(middle)
    if (value === 0) return middle
    if (Math.sign(value) === Math.sign(atLeft)) {
      left = middle
      atLeft = value
      atRight /= 2
    }
    else {
      right = middle
      atRight = value
      atLeft /= 2
    }
  }
  return (left + right) / 2
}

/** Where `f` is largest between `a` and `b`, if it has one maximum there; golden section to `toleranceMs`. */
export function findMaximum(f: FunctionOfTime, a: number, b: number, toleranceMs: number): number {
  let [left, right] = [a, b]
  let [x1, x2] = [left + GOLDEN * (right - left), right - GOLDEN * (right - left)]
  let [f1, f2] = [f(x1), f(x2)]
  while (right - left > toleranceMs) {
    if (f1 >= f2) {
      right = x2
      x2 = x1
      f2 = f1
      x1 = left + GOLDEN * (right - left)
      f1 = f(x1)
    }
    else {
      left = x1
      x1 = x2
      f1 = f2
      x2 = right - GOLDEN * (right - left)
      f2 = f(x2)
    }
  }
  const [best] = [[a, f(a)], [b, f(b)], [(left + right) / 2, f((left + right) / 2)]]
    .sort((p, q) => q[1]! - p[1]!) as [[number, number], ...[number, number][]]
  return best[0]
}
