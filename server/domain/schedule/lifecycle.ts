/** What the running process knows of itself; health answers from here. */
interface Lifecycle { demo: 'off' | 'loading' | 'loaded' | 'failed', schedulerBeatAt: number, stopping: boolean, /** Since when this process has been seen by the database without a gap. */ steadySince: number, /** What the schedule is at. */ wake: Promise<void> | null }

export const lifecycle: Lifecycle = { demo: 'off', schedulerBeatAt: 0, stopping: false, steadySince: 0, wake: null }
