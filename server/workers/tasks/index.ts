/** Heavy computing, off the thread that answers requests. Each task is a pure function of plain data. */
export const tasks = {
}

export type TaskName = keyof typeof tasks
export type TaskInput<N extends TaskName> = Parameters<typeof tasks[N]>[0]
export type TaskOutput<N extends TaskName> = ReturnType<typeof tasks[N]>
