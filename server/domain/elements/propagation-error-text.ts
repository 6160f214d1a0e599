import type { PropagationError } from '#shared/physics/types'

/** The outcomes of SGP4 that end a set's validity, in words. */
export const propagationErrorText: Record<PropagationError, string> = {
  'eccentricity-out-of-range': 'the mean eccentricity leaves [0, 1)',
  'mean-motion-not-positive': 'the mean motion is not positive',
  'perturbed-eccentricity-out-of-range': 'the perturbed eccentricity leaves [0, 1]',
  'semi-latus-rectum-negative': 'the orbit’s semi-latus rectum turns negative',
  'sub-orbital-epoch': 'the orbit meets the Earth',
  'decayed': 'the orbit has decayed',
}
