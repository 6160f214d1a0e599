/** What decides between passes that want one antenna. */
export interface Wanting { readonly passId: string, readonly antennaId: string, readonly priority: number, readonly aosMs: number, readonly busyFromMs: number, readonly busyToMs: number }
export interface Given { readonly antennaId: string, readonly passId: string, readonly otherPassId: string }

/** By how long two passes want the antenna at once, ms; negative is the gap between them. */
export const overlapMs = (one: Wanting, other: Wanting): number => Math.min(one.busyToMs, other.busyToMs) - Math.max(one.busyFromMs, other.busyFromMs)

/** The higher priority comes first, then the earlier AOS. */
export function inPreference(one: Wanting, other: Wanting): number {
  return other.priority - one.priority || one.aosMs - other.aosMs || (one.passId < other.passId ? -1 : 1)
}

/** Pairs that want one antenna at one time, set-up included, or with less than `slackMs` between them. `wants` by busy time. */
export function pairsOf<W extends Wanting>(wants: readonly W[], slackMs = 0): [W, W][] {
  return [...byAntenna(wants).values()].flatMap(own => own.flatMap((one, i) => own.slice(i + 1).filter(other => overlapMs(one, other) > -slackMs).map((other): [W, W] => [one, other])))
}

function byAntenna<W extends Wanting>(wants: readonly W[]): Map<string, W[]> {
  const groups = new Map<string, W[]>()
  for (const want of wants) groups.set(want.antennaId, [...groups.get(want.antennaId) ?? [], want])
  return groups
}

/**
 * Who stands down for whom on one antenna. What people decided stands; among the others the preferred pass has the antenna
 * and those that want it at the same time stand down, unless they only meet passes that stand down themselves.
 */
export function settle<W extends Wanting>(wants: readonly W[], decisions: readonly Given[]): Map<string, { for: W, byDefault: boolean }> {
  const down = new Map<string, { for: W, byDefault: boolean }>()
  for (const { passId, otherPassId } of decisions) {
    const [winner, loser] = [wants.find(want => want.passId === passId), wants.find(want => want.passId === otherPassId)]
    if (winner && loser && overlapMs(winner, loser) > 0) down.set(otherPassId, { for: winner, byDefault: false })
  }
  const having: W[] = []
  for (const want of wants.filter(({ passId }) => !down.has(passId)).sort(inPreference)) {
    const before = having.find(other => overlapMs(want, other) > 0 && !decisions.some(({ passId, otherPassId }) => passId === want.passId && otherPassId === other.passId))
    if (before) down.set(want.passId, { for: before, byDefault: true })
    else having.push(want)
  }
  return down
}
