import type { Asked } from '~/utils/bench/answer'
import type { BenchQuestion } from '~/utils/bench/question'
import type { ApiProblem } from '~/utils/api'
import { bodyOf, problemsOf } from '~/utils/bench/body'
import type { Errors } from '~/utils/bench/body'

/** What the table is read with, of a link and a radio that may be held. */
type Figures = Pick<Asked, 'carrierHz' | 'direction' | 'latencyMs' | 'converter'>

/** Without the framework's own types of routes, which are deeper than the compiler goes: the route table types the answer. */
const anyFetch = (url: string, options: object) => ($fetch as (url: string, options: object) => Promise<unknown>)(url, options)

/** Asks the bench. What is wrong stands in `errors` by path, from the schemas before sending and from the server after. */
export function useBenchAnswer(question: BenchQuestion, figures: () => Figures) {
  const asked = shallowRef<Asked | null>(null)
  const errors = ref<Errors>({})
  const problem = shallowRef<ApiProblem | null>(null)
  const busy = ref(false)
  const said = ref('')
  const key = computed(() => JSON.stringify(bodyOf(question)))
  const former = computed(() => asked.value !== null && asked.value.key !== key.value)
  let running: AbortController | null = null

  /** True when an answer came. */
  async function ask(): Promise<boolean> {
    cancel()
    problem.value = null
    errors.value = problemsOf(question)
    if (Object.keys(errors.value).length > 0) return false
    const mine = running = new AbortController()
    const [body, of, k, asks] = [bodyOf(question), figures(), question.budget.k, key.value]
    busy.value = true
    said.value = 'Computing.'
    try {
      const answer = await callApi('POST /api/bench/predict', { body }, (url, options) => anyFetch(url, { ...options, signal: mine.signal }))
      if (running !== mine) return false
      asked.value = { answer, ...of, k, key: asks }
      said.value = `${answer.passes.length} ${answer.passes.length === 1 ? 'pass' : 'passes'} found.`
      return true
    }
    catch (error) {
      if (running !== mine) return false
      problem.value = asProblem(error)
      said.value = ''
      for (const field of problem.value.fields) errors.value[field.path] ??= field.line ? `Line ${field.line}: ${field.message}` : field.message
      return false
    }
    finally {
      if (running === mine) {
        running = null
        busy.value = false
      }
    }
  }
  function cancel() {
    running?.abort()
    running = null
    if (busy.value) said.value = 'Cancelled.'
    busy.value = false
  }
  function clear() {
    cancel()
    asked.value = null
    errors.value = {}
    problem.value = null
    said.value = ''
  }
  onScopeDispose(cancel)
  return { asked, errors, problem, busy, said, former, ask, cancel, clear }
}
