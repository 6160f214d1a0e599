import { benchPredict } from './bench-predict'
import { compareSets } from './compare-sets'
import { fitSets } from './fit-sets'
import { learnAccuracyTask } from './learn-accuracy'
import { passSamples } from './pass-samples'
import { predictStation } from './predict-station'
import { previewStation } from './preview-station'
import { readUpload } from './read-upload'

/** Heavy computing, off the thread that answers requests. Each task is a pure function of plain data. */
export const tasks = {
  'bench-predict': benchPredict,
  'compare-sets': compareSets,
  'fit-sets': fitSets,
  'learn-accuracy': learnAccuracyTask,
  'read-upload': readUpload,
  'predict-station': predictStation,
  'preview-station': previewStation,
  'pass-samples': passSamples,
}

export type TaskName = keyof typeof tasks
export type TaskInput<N extends TaskName> = Parameters<typeof tasks[N]>[0]
export type TaskOutput<N extends TaskName> = Awaited<ReturnType<typeof tasks[N]>>
