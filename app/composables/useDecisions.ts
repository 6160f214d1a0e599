import type { TableBrief } from '#shared/schemas/tables'
import type { ApiProblem } from '~/utils/api'

export type Decision = 'approve' | 'hold' | 'release' | 'publish' | 'withdraw'

/** Decisions on one table or many: what is under way, what went wrong with which, and what was done, in words. */
export function useDecisions(done: () => unknown) {
  const busy = ref<ReadonlySet<string>>(new Set())
  const problems = shallowRef<ReadonlyMap<string, ApiProblem>>(new Map())
  const said = ref('')

  async function decide(decision: Decision, tables: readonly TableBrief[], reason?: string): Promise<boolean> {
    const targets = tables.filter(table => !busy.value.has(table.id))
    if (targets.length === 0) return false
    busy.value = new Set([...busy.value, ...targets.map(table => table.id)])
    const failed = new Map(problems.value)
    let went = 0
    for (const table of targets) {
      failed.delete(table.id)
      try {
        await send(decision, table, reason)
        went += 1
      }
      catch (error) {
        failed.set(table.id, asProblem(error))
      }
    }
    problems.value = failed
    busy.value = new Set([...busy.value].filter(id => !targets.some(table => table.id === id)))
    const words: Record<Decision, string> = { approve: 'approved', hold: 'held', release: 'released', publish: 'published', withdraw: 'withdrawn' }
    said.value = `${went} ${went === 1 ? 'table' : 'tables'} ${words[decision]}${went < targets.length ? `, ${targets.length - went} not: see the reason at each` : ''}.`
    await done()
    return went === targets.length
  }
  return { decide, busy, problems, said }
}

function send(decision: Decision, { id, revision }: TableBrief, reason = '') {
  const params = { id }
  switch (decision) {
    case 'approve': return callApi('POST /api/tables/{id}/approve', { params, body: { revision } })
    case 'hold': return callApi('POST /api/tables/{id}/hold', { params, body: { revision, reason } })
    case 'release': return callApi('POST /api/tables/{id}/release', { params, body: { revision } })
    case 'publish': return callApi('POST /api/tables/{id}/publish', { params, body: { revision } })
    case 'withdraw': return callApi('POST /api/tables/{id}/withdraw', { params, body: { reason } })
  }
}
