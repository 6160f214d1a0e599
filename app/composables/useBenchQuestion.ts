import type { BenchQuestion } from '~/utils/bench/question'
import { fromAddress, longestTextInAddress, toAddress } from '~/utils/bench/address'

const TEXT_KEY = 'bench-elements'

/**
 * The bench's question, held in the address: a reload or a colleague who is sent it has the same one. Element text too
 * long for an address is kept in this tab only. `asked` says that it was computed, `pass` which pass is looked at.
 */
export function useBenchQuestion() {
  const route = useRoute()
  const router = useRouter()
  const clock = useClock()
  const question: BenchQuestion = reactive(fromAddress(route.query, clock.now))
  const place = reactive(placeIn(route.query))
  /** Grows when the address, not the form, brings another question. */
  const arrivals = ref(0)
  const textTooLong = computed(() => question.elements.source === 'given' && question.elements.text.length > longestTextInAddress)

  const written = computed(() => ({ ...toAddress(question), ...(place.asked ? { asked: '1' } : {}), ...(place.pass > 1 ? { pass: String(place.pass) } : {}) }))
  let last = ''
  watchDebounced(written, async (query) => {
    if (router.currentRoute.value.path !== route.path) return
    last = JSON.stringify(query)
    keepLongText()
    await router.replace({ query })
  }, { debounce: 250 })
  watch(() => route.query, (query) => {
    if (route.path !== router.currentRoute.value.path || JSON.stringify(query) === last) return
    Object.assign(question, fromAddress(query, clock.now))
    Object.assign(place, placeIn(query))
    arrivals.value += 1
  })

  // A browser may forbid the storage; then only a reload loses the text.
  function keepLongText() {
    try {
      if (textTooLong.value) sessionStorage.setItem(TEXT_KEY, question.elements.text)
      else sessionStorage.removeItem(TEXT_KEY)
    }
    catch { /* see above */ }
  }
  onMounted(() => {
    if (question.elements.source !== 'given' || question.elements.text !== '' || route.query.e !== 'given') return
    try {
      question.elements.text = sessionStorage.getItem(TEXT_KEY) ?? ''
    }
    catch { /* see above */ }
  })
  return { question, place, arrivals, textTooLong }
}

function placeIn(query: Record<string, unknown>) {
  return { asked: query.asked === '1', pass: Math.max(1, Math.floor(Number(query.pass)) || 1) }
}
