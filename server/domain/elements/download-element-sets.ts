import { inArray } from 'drizzle-orm'
import { NOTATION_FILES, writeElements } from '#shared/formats/elements/write/write-elements'
import type { ElementNotation } from '#shared/formats/elements/write/write-elements'
import { elementSets } from '~~/server/database/schema'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { readSettings } from '../settings/read-settings'

export interface ElementsFile {
  text: string
  mediaType: string
  /** Letters, digits and marks that no file system or header minds. */
  fileName: string
  /** Keywords whose values the notation rounds. */
  rounded: readonly string[]
}

const plain = (text: string) => text.normalize('NFKD').replace(/[^\w-]+/g, '-').replace(/^[-_]+|[-_]+$/g, '').slice(0, 40)

/** "90001-20261130T121746Z.kvn", or how many there are. */
function fileNameOf(sets: readonly { elements: { catalogueNumber: string | null, designator: string | null, name: string | null, epochUtcUs: number } }[], ending: string): string {
  const [first] = sets
  const { catalogueNumber, designator, name, epochUtcUs } = first!.elements
  if (sets.length > 1) return `${sets.length}-element-sets.${ending}`
  const object = plain(catalogueNumber ?? designator ?? name ?? '') || 'element-set'
  return `${object}-${new Date(Math.floor(epochUtcUs / 1000)).toISOString().slice(0, 19).replace(/[-:]/g, '')}Z.${ending}`
}

/**
 * Element sets in one notation, in the order asked for, as a file to take elsewhere.
 * @throws DomainError `not-found` for an unknown set, `not-valid` where a TLE cannot carry one
 */
export async function downloadElementSets({ db, now }: Pick<Deps, 'db' | 'now'>, { ids, notation }: { ids: readonly string[], notation: ElementNotation }): Promise<ElementsFile> {
  const rows = await db.select({ id: elementSets.id, elements: elementSets.elements }).from(elementSets).where(inArray(elementSets.id, [...ids]))
  const byId = new Map(rows.map(row => [row.id, row]))
  const sets = ids.map((id) => {
    const row = byId.get(id)
    if (!row) throw new DomainError('not-found', 'There is no element set under this address.')
    return row
  })
  const { organisation } = await readSettings(db)
  const written = writeElements(sets.map(set => set.elements), notation, { createdMs: now.getTime(), originator: organisation })
  if (!written.ok) throw new DomainError('not-valid', written.reason, [{ path: 'notation', message: written.reason }])
  const { mediaType, ending } = NOTATION_FILES[notation]
  return { text: written.text, mediaType, fileName: fileNameOf(sets, ending), rounded: written.changed }
}
