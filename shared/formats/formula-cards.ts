/** What one function of the core computes, as its docstring states it. */
export interface FormulaCard {
  /** The exported function, also the card's anchor. */
  readonly name: string
  /** From shared/physics. */
  readonly file: string
  readonly title: string
  /** One sentence. */
  readonly gives: string
  readonly formula: string
  readonly source: string
  readonly units: string
  readonly frame: string
  readonly range: string
  /** The figure that a test holds, with the test's file below tests/physics in brackets. */
  readonly tolerance: string
}

export const cardTags = ['formula', 'source', 'units', 'frame', 'range', 'tolerance'] as const

const DOCUMENTED = /\/\*\*((?:[^*]|\*(?!\/))*)\*\/\s*export (?:async )?(?:function\*?|const) (\w+)/g

/**
 * The cards in the text of a source file: one for each exported function whose docstring has a line `@card Title: what it gives.`
 * A field that the docstring does not have is empty.
 */
export function readCards(file: string, text: string): FormulaCard[] {
  return [...text.matchAll(DOCUMENTED)].flatMap(([, doc = '', name = '']) => {
    const tags = tagsOf(doc)
    const card = tags.get('card')
    if (card === undefined) return []
    const colon = card.indexOf(': ')
    const field = (tag: typeof cardTags[number]) => tags.get(tag) ?? ''
    return {
      name, file,
      title: colon < 0 ? card : card.slice(0, colon),
      gives: colon < 0 ? '' : sentence(card.slice(colon + 2)),
      formula: field('formula'), source: field('source'), units: field('units'), frame: field('frame'), range: field('range'), tolerance: field('tolerance'),
    }
  })
}

/** A tag goes on until the next one or an empty line. */
function tagsOf(doc: string): Map<string, string> {
  const tags = new Map<string, string>()
  let open: string | null = null
  for (const line of doc.split('\n').map(line => line.replace(/^\s*\*?\s?/, '').trim())) {
    const tag = /^@(\w+)\s*(.*)$/.exec(line)
    if (tag) tags.set(open = tag[1]!, tag[2]!)
    else if (line === '') open = null
    else if (open !== null) tags.set(open, `${tags.get(open)} ${line}`.trim())
  }
  return tags
}

const sentence = (text: string): string => text.charAt(0).toUpperCase() + text.slice(1)
