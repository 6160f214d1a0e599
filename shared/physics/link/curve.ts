/**
 * Loss over offset of one detector on its main lobe. Offsets are ε = Δf·T ≥ 0, losses dB, positive, growing with ε.
 * `lossDb` goes on past the main lobe where the detector's formula does.
 */
export interface LossCurve {
  /** Where the main lobe ends: the first null, or the offset at which the detector fails. */
  readonly endEpsilon: number
  /** Between 0 and `LOSS_CAP_DB`. */
  lossDb(epsilon: number): number
  /** Whether the loss at ε is at most this many dB; cheap where `lossDb` itself needs iteration. */
  isWithin(epsilon: number, permittedDb: number): boolean
}

/** At a null of the detector nothing comes out; JSON has no Infinity, so the loss is stated as this, dB. */
export const LOSS_CAP_DB = 300

/**
 * Curve of a detector whose output amplitude falls with the offset: −20 log10 of it, dB, capped.
 *
 * @card Loss of an amplitude: curve of a detector whose output falls with the offset.
 * @formula −20 log10 of the amplitude
 * @source definition of the decibel
 * @units symbol rates → dB
 * @frame none
 * @range 0 to 300 dB, at which a null is stated
 * @tolerance 0.0005 dB of tables (link/loss.test.ts)
 */
export function amplitudeCurve(endEpsilon: number, amplitude: (epsilon: number) => number): LossCurve {
  return {
    endEpsilon,
    lossDb(epsilon) {
      const left = amplitude(epsilon)
      // A sine at a multiple of π leaves 1e-17: that is a null too.
      return left <= 1e-15 ? LOSS_CAP_DB : Math.max(0, -20 * Math.log10(left))
    },
    isWithin: (epsilon, permittedDb) => amplitude(epsilon) >= 10 ** (-permittedDb / 20),
  }
}
