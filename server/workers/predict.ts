import type { TaskInput, TaskName, TaskOutput } from './tasks'
import { tasks } from './tasks'

/** Entry of the worker thread: one task by name; inputs and answers are plain data. */
export default async function run<N extends TaskName>({ name, input }: { name: N, input: TaskInput<N> }): Promise<TaskOutput<N>> {
  return await tasks[name](input as never) as TaskOutput<N>
}
