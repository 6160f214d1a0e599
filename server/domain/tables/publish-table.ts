import type { TableBrief } from '#shared/schemas/tables'
import type { Deps, PersonActor } from '../context'
import { DomainError } from '../errors'
import { publishRevision } from './publish-revision'
import { getBrief } from './table-brief'

/** A person publishes now. */
export async function publishTable(deps: Deps<PersonActor>, { id, revision }: { id: string, revision?: number }): Promise<TableBrief> {
  const outcome = await publishRevision(deps, { tableId: id, mover: 'person', revision })
  if (outcome.outcome !== 'published') throw new DomainError('conflict', outcome.detail)
  return getBrief(deps, id)
}
