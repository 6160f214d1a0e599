import type { UtcMs } from '#shared/physics/types'

/** A pass moves by seconds when elements change, by minutes after a manoeuvre; beyond this it is another pass. */
const LARGEST_SHIFT_MS = 30 * 60_000

/** How far a culmination may move and still be the same pass: half a revolution, 30 minutes at most. */
export function identityToleranceMs(meanMotionRevPerDay: number): number {
  return Math.min(LARGEST_SHIFT_MS, 86_400_000 / meanMotionRevPerDay / 2)
}

interface Culminating { readonly culminationMs: UtcMs }

/**
 * Which known pass each predicted one is: the nearest culmination within the tolerance, nearest pairs first, each used
 * once. Passes that were gone are taken only by what no other known pass fits. Null: a new pass.
 */
export function matchPasses<K extends Culminating & { readonly gone?: boolean }>(predicted: readonly Culminating[], known: readonly K[], toleranceMs: number): (K | null)[] {
  const pairs = predicted.flatMap((pass, index) => known.map(candidate => ({ index, candidate, apartMs: Math.abs(candidate.culminationMs - pass.culminationMs) })))
    .filter(pair => pair.apartMs <= toleranceMs)
    .sort((a, b) => Number(a.candidate.gone ?? false) - Number(b.candidate.gone ?? false) || a.apartMs - b.apartMs)
  const matches: (K | null)[] = predicted.map(() => null)
  const used = new Set<K>()
  for (const { index, candidate } of pairs) {
    if (matches[index] || used.has(candidate)) continue
    matches[index] = candidate
    used.add(candidate)
  }
  return matches
}
