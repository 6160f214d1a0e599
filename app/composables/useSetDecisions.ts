import type { ComparisonOut, ElementSetOut, PreviewOut } from '#shared/schemas/elements'
import { formatUtc } from '#shared/utils/format'
import type { ApiProblem } from '~/utils/api'

const compareAtMost = 20

/** Decisions on element sets: what each would change, what is under way, what went wrong with which, and what was done, in words. */
export function useSetDecisions(waiting: Ref<readonly ElementSetOut[]>, done: () => unknown) {
  const comparisons = ref<Record<string, ComparisonOut>>({})
  const busy = ref<ReadonlySet<string>>(new Set())
  const problems = shallowRef<ReadonlyMap<string, ApiProblem>>(new Map())
  const said = ref('')

  async function compare(set: ElementSetOut) {
    if (comparisons.value[set.id]) return
    try {
      comparisons.value[set.id] = await callApi('GET /api/element-sets/{id}/comparison', { params: { id: set.id } })
    }
    catch (error) {
      note(set.id, asProblem(error))
    }
  }
  // They take the server a moment each: one after the other, the newest first, kept while the page is open.
  watch(waiting, async (sets) => {
    if (import.meta.server) return
    for (const set of sets.slice(0, compareAtMost)) await compare(set)
  }, { immediate: true })

  function note(id: string, problem: ApiProblem | null) {
    const next = new Map(problems.value)
    if (problem) next.set(id, problem)
    else next.delete(id)
    problems.value = next
  }

  /** Does one thing to some sets, one after the other; true where all went. */
  async function act(sets: readonly ElementSetOut[], send: (set: ElementSetOut) => Promise<unknown>, words: (went: ElementSetOut[]) => string): Promise<boolean> {
    busy.value = new Set([...busy.value, ...sets.map(set => set.id)])
    const went: ElementSetOut[] = []
    for (const set of sets) {
      note(set.id, null)
      try {
        await send(set)
        went.push(set)
      }
      catch (error) {
        note(set.id, asProblem(error))
      }
    }
    busy.value = new Set([...busy.value].filter(id => !sets.some(set => set.id === id)))
    if (went.length > 0) said.value = words(went)
    await done()
    return went.length === sets.length
  }

  const named = (set: ElementSetOut) => `${set.spacecraftName}, ${formatUtc(Date.parse(set.epoch), 'minute')}`
  const use = (set: ElementSetOut) => act([set], async ({ id }) => {
    await callApi('POST /api/element-sets/{id}/use', { params: { id } })
    // What else waits for this spacecraft is now to be compared with this set.
    comparisons.value = Object.fromEntries(Object.entries(comparisons.value).filter(([other]) => waiting.value.find(one => one.id === other)?.spacecraftId !== set.spacecraftId))
  }, () => `In use: ${named(set)}. Passes and tables are being recomputed.`)
  const refuse = (sets: readonly ElementSetOut[], reason: string) => act(sets, ({ id }) => callApi('POST /api/element-sets/{id}/refuse', { params: { id }, body: { reason } }),
    went => went.length === 1 ? `Refused and kept on record: ${named(went[0]!)}.` : `${went.length} sets refused and kept on record.`)
  const schedule = (set: ElementSetOut, at: string) => act([set], ({ id }) => callApi('POST /api/element-sets/{id}/schedule-use', { params: { id }, body: { at } }),
    () => `${named(set)} goes into use at ${formatUtc(Date.parse(at), 'minute')}.`)
  const cancel = (set: ElementSetOut) => act([set], ({ id }) => callApi('POST /api/element-sets/{id}/cancel-use', { params: { id } }), () => `Taken back: ${named(set)} waits for a decision.`)

  return { comparisons, compare, busy, problems, said, use, refuse, schedule, cancel }
}

/** What using a set would do to tables, or did; asked anew for each set. */
export function usePreview() {
  const preview = shallowRef<PreviewOut | null>(null)
  const problem = shallowRef<ApiProblem | null>(null)
  let asked = ''
  async function load(id: string, asOf?: PreviewOut['asOf']) {
    asked = id
    preview.value = null
    problem.value = null
    try {
      const answer = await callApi('GET /api/element-sets/{id}/preview', { params: { id }, query: { asOf } })
      if (asked === id) preview.value = answer
    }
    catch (error) {
      if (asked === id) problem.value = asProblem(error)
    }
  }
  return { preview, load, problem }
}
