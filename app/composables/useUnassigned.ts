import type { ElementSetOut } from '#shared/schemas/elements'
import type { Handling } from '~/utils/elements/handling'
import { handlings, wordsOf } from '~/utils/elements/handling'

const atOnce = 50

/** Sets that belong to no spacecraft: which pile and which of it stands in the address; some at a time, however many there are. */
export function useUnassigned(told: (words: string) => unknown) {
  const route = useRoute()
  const pile = computed<Handling>(() => handlings.find(name => name === route.query.pile) ?? 'open')
  const find = computed(() => typeof route.query.find === 'string' && route.query.find.trim() !== '' ? route.query.find : undefined)
  const setQuery = (change: Record<string, string | undefined>) => navigateTo({ query: { ...route.query, ...change } }, { replace: true })

  const query = computed(() => ({ query: { unassigned: 'true', handling: pile.value, q: find.value, limit: atOnce } }))
  const list = useApi('GET /api/element-sets', query)
  const counts = useApi('GET /api/element-sets/counts', {}, { pollS: 30 })
  const further = shallowRef<ElementSetOut[]>([])
  // Where the pages fetched further have come to; until there are any, where the first one ends.
  const furtherCursor = ref<string | null>()
  const cursor = computed(() => furtherCursor.value === undefined ? list.data.value?.nextCursor ?? null : furtherCursor.value)
  const chosen = ref<string[]>([])
  watch(list.data, () => {
    further.value = []
    furtherCursor.value = undefined
    chosen.value = []
  })
  const sets = computed(() => [...list.data.value?.items ?? [], ...further.value])
  const more = useAction(async () => {
    if (!cursor.value) return
    const page = await callApi('GET /api/element-sets', { query: { ...query.value.query, cursor: cursor.value } })
    further.value = [...further.value, ...page.items]
    furtherCursor.value = page.nextCursor
  })

  const refresh = () => Promise.all([list.refresh(), counts.refresh()])
  async function tell(words: string) {
    await refresh()
    await told(words)
  }
  /** Named ones, or all that are found on this pile. */
  const move = useAction(async (to: Handling, ids: readonly string[] | null) => {
    const body = ids ? { ids: [...ids] } : { handling: pile.value, q: find.value }
    const { changed } = await callApi(`POST /api/element-sets/${({ open: 'reopen', kept: 'keep', dropped: 'drop' } as const)[to]}`, { body })
    await tell(wordsOf(to, changed))
  })
  const assign = useAction(async (ids: readonly string[], craft: { id: string, name: string }) => {
    const { changed } = await callApi('POST /api/element-sets/assign', { body: { ids: [...ids], spacecraftId: craft.id } })
    await tell(`${changed === 1 ? 'The set waits' : `${changed} sets wait`} for ${craft.name} now.`)
    return true
  })
  return { pile, find, setQuery, list, counts, sets, cursor, chosen, more, move, assign, refresh }
}
export type Unassigned = ReturnType<typeof useUnassigned>
