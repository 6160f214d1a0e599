import type { ApiProblem } from '~/utils/api'

/** One action against the server at a time: is it under way, and what went wrong with it. */
export function useAction<A extends unknown[], T>(act: (...args: A) => Promise<T>) {
  const busy = ref(false)
  const problem = shallowRef<ApiProblem | null>(null)
  async function run(...args: A): Promise<T | undefined> {
    if (busy.value) return undefined
    busy.value = true
    problem.value = null
    try {
      return await act(...args)
    }
    catch (error) {
      problem.value = asProblem(error)
      return undefined
    }
    finally {
      busy.value = false
    }
  }
  return { run, busy, problem }
}
