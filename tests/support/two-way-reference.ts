import type { referenceDoppler } from './reference-data'

type Pass = ReturnType<typeof referenceDoppler>['passes'][number]

/** Between samples by eight points: a few tenths of a second off one of them, at 10 s. */
function between(values: readonly number[], at: number): number {
  const first = Math.max(0, Math.min(values.length - 8, Math.round(at) - 4))
  let sum = 0
  for (let i = first; i < first + 8; i++) {
    let weight = 1
    for (let j = first; j < first + 8; j++) if (j !== i) weight *= (at - j) / (i - j)
    sum += weight * values[i]!
  }
  return sum
}

const columnOf = (columns: Readonly<Record<string, readonly number[]>>, carrierHz: number) => Object.entries(columns).find(([key]) => Number(key) === carrierHz)![1]

export const oneWayReference = (pass: Pass, carrierHz: number): readonly number[] => columnOf(pass.receivedMinusCarrierHz, carrierHz)

/**
 * Received minus carrier of a coherent downlink by the independent program's two legs: what is received over what is
 * sent down at each sample, times what is heard over what was sent up a round trip before. The first sample, whose round
 * trip begins before the reference does, is NaN.
 */
export function twoWayReference(pass: Pass, carrierHz: number): number[] {
  const sent = columnOf(pass.transmitMinusCarrierHz, carrierHz)
  return oneWayReference(pass, carrierHz).map((received, k) => {
    if (k === 0) return NaN
    const up = -between(sent, k - 2 * pass.lightTimeDownS[k]! / pass.stepS) / carrierHz
    const heard = up / (1 - up)
    const down = received / carrierHz
    return carrierHz * (heard + down + heard * down)
  })
}
