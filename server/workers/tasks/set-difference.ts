import type { TrackDifference } from '#shared/physics/orbit/track-difference'
import { trackDifference } from '#shared/physics/orbit/track-difference'
import type { Ephemeris, UtcMs } from '#shared/physics/types'

export interface DifferenceSample extends TrackDifference { readonly atMs: UtcMs }

/** A revolution of a low orbit has some twenty of them. */
const STEP_MS = 300_000
const SPAN_MS = 86_400_000

/** Where the new set has the spacecraft against the set in use, over a day; it ends where either does. */
export function setDifference(mine: Ephemeris, old: Ephemeris, fromMs: UtcMs): DifferenceSample[] {
  const samples: DifferenceSample[] = []
  for (let atMs = fromMs; atMs <= fromMs + SPAN_MS; atMs += STEP_MS) {
    const [now, before] = [mine.stateAt(atMs), old.stateAt(atMs)]
    if (!now || !before) break
    const { radialM, alongM, crossM } = trackDifference(before, now)
    samples.push({ atMs, radialM: toMetre(radialM), alongM: toMetre(alongM), crossM: toMetre(crossM) })
  }
  return samples
}

const toMetre = (value: number): number => Math.round(value) + 0
