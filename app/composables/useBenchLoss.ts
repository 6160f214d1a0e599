import type { RouteAnswer } from '#shared/routes'
import { ApiProblem } from '~/utils/api'
import { pickLink } from '~/utils/bench/question'

type LossAnswer = RouteAnswer<'POST /api/bench/loss'>

/** What an offset costs on a link, asked of the server a moment after typing stops; null while something is missing. */
export function useBenchLoss(link: () => Parameters<typeof pickLink>[0] | null, offsetHz: () => number | null) {
  const loss = shallowRef<LossAnswer | null>(null)
  const problem = shallowRef<ApiProblem | null>(null)
  let latest = 0
  const wanted = computed(() => {
    const [of, at] = [link(), offsetHz()]
    return of === null || at === null || !Number.isFinite(at) ? null : JSON.stringify({ ...pickLink(of), offsetHz: at })
  })
  async function ask() {
    const mine = ++latest
    const answer = wanted.value === null ? null : await callApi('POST /api/bench/loss', { body: JSON.parse(wanted.value) }).catch(asProblem)
    if (mine !== latest) return
    problem.value = answer instanceof ApiProblem ? answer : null
    loss.value = answer instanceof ApiProblem ? null : answer
  }
  // The number of another offset never stands beside this one.
  watch(wanted, () => {
    latest += 1
    loss.value = null
    problem.value = null
  })
  watchDebounced(wanted, ask, { debounce: 250 })
  onMounted(ask)
  return { loss, problem }
}
