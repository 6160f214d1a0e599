/** What the running process knows of itself; health answers from here. */
interface Lifecycle { demo: 'off' | 'loading' | 'loaded' | 'failed', schedulerBeatAt: number, stopping: boolean }

export const lifecycle: Lifecycle = { demo: 'off', schedulerBeatAt: 0, stopping: false }
