import type { LineNote } from '#shared/formats/elements/read-elements'
import type { MeanElements } from '#shared/physics/types'

/** A spacecraft by what a set can name it: plain data, to cross to a worker. */
export interface Named { readonly id: string, readonly name: string, readonly number: string | null, readonly designator: string | null }

export interface Match { spacecraftId: string, warning: LineNote | null }
export type Matcher = (elements: MeanElements, line: number) => Match | null

/** 00005 and 5 are one number. */
const bare = (number: string) => number.replace(/^0+(?=\d)/, '')

/**
 * Finds the spacecraft that a set belongs to: by catalogue number, then by designator, then by name whatever its case. A
 * match by the latter two whose catalogue numbers differ is made with a warning.
 */
export function createMatcher(fleet: readonly Named[]): Matcher {
  const index = (keyOf: (row: Named) => string | null | undefined) => {
    const found = new Map<string, Named>()
    for (const row of fleet) {
      const key = keyOf(row)
      if (key && !found.has(key)) found.set(key, row)
    }
    return found
  }
  const byNumber = index(row => row.number && bare(row.number))
  const byDesignator = index(row => row.designator)
  const byName = index(row => row.name.trim().toLowerCase())

  return ({ catalogueNumber, designator, name }, line) => {
    const number = catalogueNumber === null ? null : bare(catalogueNumber)
    const numbered = number === null ? undefined : byNumber.get(number)
    if (numbered) return { spacecraftId: numbered.id, warning: null }
    const designated = designator === null ? undefined : byDesignator.get(designator.trim().toUpperCase())
    const row = designated ?? (name === null ? undefined : byName.get(name.trim().toLowerCase()))
    if (!row) return null
    const differs = number !== null && row.number !== null
    const message = `Taken for ${row.name} by its ${designated ? 'designator' : 'name'}, although the set bears catalogue number ${catalogueNumber} and the spacecraft ${row.number}. Check that it is the same object.`
    return { spacecraftId: row.id, warning: differs ? { line, ...(name === null ? {} : { name }), code: 'other-number', message } : null }
  }
}
