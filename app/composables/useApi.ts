import type { MaybeRefOrGetter } from 'vue'
import type { RouteAnswer, RouteName } from '#shared/routes'
import type { ApiProblem, CallOptions } from '~/utils/api'

export interface ApiOptions {
  /** Seconds between refreshes while the page is looked at. */
  pollS?: number
  immediate?: boolean
}

/**
 * Server data of a GET route, keyed by route and arguments, rendered with the page. Refreshes when the arguments
 * change, and by itself when `pollS` is given; `stale` says that two refreshes in a row failed.
 */
export function useApi<R extends RouteName>(route: R, args: MaybeRefOrGetter<CallOptions<R>> = {}, options: ApiOptions = {}) {
  const fetcher = useRequestFetch() as never
  const key = computed(() => `${route} ${JSON.stringify(toValue(args))}`)
  const result = useAsyncData<RouteAnswer<R>, ApiProblem>(key, () => callApi(route, toValue(args), fetcher), { immediate: options.immediate ?? true, deep: false })
  const failures = ref(0)
  const stale = computed(() => failures.value >= 2)
  watch(result.status, (status) => {
    if (status === 'success') failures.value = 0
    if (status === 'error') failures.value += 1
  })
  watch(result.error, (error) => {
    const cause = (error as { cause?: unknown } | null)?.cause ?? error
    if (import.meta.client && (cause as { status?: number } | null)?.status === 401) void navigateTo({ path: '/sign-in', query: { to: useRoute().fullPath } })
  })
  if (options.pollS) {
    const visibility = useDocumentVisibility()
    useIntervalFn(() => {
      if (visibility.value === 'visible' && result.status.value !== 'pending') void result.refresh()
    }, options.pollS * 1000)
  }
  const problem = computed(() => result.error.value ? asProblem((result.error.value as { cause?: unknown }).cause ?? result.error.value) : null)
  return { data: result.data, status: result.status, problem, refresh: result.refresh, stale, ready: result }
}
