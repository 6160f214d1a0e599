import type { LearnedAccuracy } from '#shared/physics/accuracy/learned'
import { learnAccuracy } from '#shared/physics/accuracy/learned'
import type { AlongTrackGrowth } from '#shared/physics/accuracy/prior'
import type { MeanElements } from '#shared/physics/types'

export interface LearnAccuracyInput { readonly sets: readonly MeanElements[], readonly prior: AlongTrackGrowth }

export const learnAccuracyTask = ({ sets, prior }: LearnAccuracyInput): LearnedAccuracy => learnAccuracy(sets, prior)
