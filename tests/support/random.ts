/** Numbers in [0, 1) that a seed decides (xorshift, Marsaglia 2003), so that a failed run can be had again. */
export function seededRandom(seed: number): () => number {
  let state = seed >>> 0 || 1
  return () => {
    state ^= state << 13
    state ^= state >>> 17
    state ^= state << 5
    return (state >>> 0) / 2 ** 32
  }
}

/** A seed of this run's own, or the one named in NULLBEAT_SEED; printed, so that a failure can be repeated. */
export function runSeed(): number {
  const seed = Number(process.env.NULLBEAT_SEED ?? Date.now() % 2 ** 31)
  console.info(`NULLBEAT_SEED=${seed}`)
  return seed
}
