import { existsSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import ts from 'typescript'
import { describe, expect, it } from 'vitest'
import { cardTags, readCards } from '../../shared/formats/formula-cards'
import type { FormulaCard } from '../../shared/formats/formula-cards'
import { sourceFiles } from '../support/source-files'

/** Helpers that compute nothing of the trade by themselves, with the reason; a whole file, or one function of it. */
const helpers: Record<string, string> = {
  'orbit/vector.ts': 'arithmetic of triples',
  'orbit/refine.ts': 'root and maximum of any function; what they find is held by findPasses',
  'orbit/positive-spans.ts': 'search for sign changes, held by findPasses',
  'orbit/mask.ts sortedMask': 'order of points, held by horizonRad',
  'orbit/ephemeris.ts gridOf': 'hands out an ephemeris\'s own nodes',
  'orbit/workable.ts sightsFrom': 'joins an ephemeris and a station, held by findPasses',
  'orbit/workable.ts partsAboveHorizon': 'step of findPasses and workablePartsForLink',
  'doppler/needed.ts statesOf': 'adapts a propagator',
  'link/positive.ts': 'refuses a figure that is not above 0, held by the tests of what it guards',
  'plan/check-scan.ts': 'where the checker looks, held by checkTable',
  'plan/check-states.ts propagated': 'asks the propagator, or says where a set ends',
  'plan/corridor.ts mirrored': 'turns time round for the search',
  'plan/holds.ts': 'step of planRetunes\' search, held by exhaustive search',
  'plan/hold-paths.ts': 'step of planRetunes\' search, held by exhaustive search',
  'plan/choose-path.ts': 'step of planRetunes\' search, held by exhaustive search',
  'plan/line-reach.ts startChoices': 'where a search lets rows begin, held by exhaustive search',
  'plan/reach.ts': 'step of planRetunes\' search, held by exhaustive search',
  'plan/fewest-rows.ts': 'step of planRetunes\' search, held by exhaustive search',
}

const howTo = `
Give it a card: add these lines at the end of the docstring right above the export, a blank line before them.

 * @card Title: one sentence that says what it gives.
 * @formula plain text, readable
 * @source publication with section or equation, or mechanics, or common practice, or from memory
 * @units what goes in → what comes out
 * @frame TEME, Earth-fixed, … or none
 * @range where it is valid
 * @tolerance the figure that a test holds (folder/name.test.ts, below tests/physics)

A helper that computes nothing of the trade goes into \`helpers\` in this test instead, with the reason.`

interface Exported { readonly file: string, readonly name: string }

const physics = sourceFiles('shared/physics').map(({ path, text }) => ({ file: path.slice('shared/physics/'.length), text }))
const cards = physics.flatMap(({ file, text }) => readCards(file, text))
const functions = physics.flatMap(({ file, text }) => exportedFunctions(file, text))
const keyOf = ({ file, name }: Exported) => `${file} ${name}`
const isHelper = (exported: Exported) => exported.file in helpers || keyOf(exported) in helpers

/** As the compiler sees them, so that the reader of cards misses none. */
function exportedFunctions(file: string, text: string): Exported[] {
  const isExported = (node: ts.Node) => ts.canHaveModifiers(node) && ts.getModifiers(node)?.some(m => m.kind === ts.SyntaxKind.ExportKeyword)
  return ts.createSourceFile(file, text, ts.ScriptTarget.ESNext).statements.flatMap((node): Exported[] => {
    if (!isExported(node)) return []
    if (ts.isFunctionDeclaration(node)) return [{ file, name: node.name!.text }]
    if (!ts.isVariableStatement(node)) return []
    return node.declarationList.declarations
      .filter(({ initializer }) => initializer && (ts.isArrowFunction(initializer) || ts.isFunctionExpression(initializer)))
      .map(({ name }) => ({ file, name: (name as ts.Identifier).text }))
  })
}

const emptyFields = (card: FormulaCard) => (['title', 'gives', ...cardTags] as const).filter(field => card[field] === '')
const testsNamed = (card: FormulaCard) => [...card.tolerance.matchAll(/([\w/-]+\.test\.ts)/g)].map(match => match[1]!)
const physicsTest = (path: string) => fileURLToPath(new URL(`../physics/${path}`, import.meta.url))

describe('formula cards', () => {
  it('stand beside every function of the core that computes something of the trade', () => {
    expect(functions.length).toBeGreaterThan(40)
    const bare = functions.filter(exported => !isHelper(exported) && !cards.some(card => keyOf(card) === keyOf(exported))).map(keyOf)
    expect(bare, `Without a formula card: ${bare.join(', ')}.${howTo}`).toEqual([])
  })

  it('leave no field out', () => {
    const lacking = cards.flatMap(card => emptyFields(card).map(field => `${keyOf(card)} lacks ${field}`))
    expect(lacking, `${lacking.join('; ')}.${howTo}`).toEqual([])
  })

  it('name a test that holds their tolerance, and that is there', () => {
    const unheld = cards.filter(card => testsNamed(card).length === 0 || !testsNamed(card).every(path => existsSync(physicsTest(path)))).map(keyOf)
    expect(unheld, `No test below tests/physics is named, or it is not there: ${unheld.join(', ')}.${howTo}`).toEqual([])
  })

  it('have names that differ, since each is an address on the page of methods', () => {
    expect(new Set(cards.map(card => card.name)).size).toBe(cards.length)
  })

  it('are not asked of helpers that are there, and no line speaks of one that is gone', () => {
    const stale = Object.keys(helpers).filter(key => !functions.some(exported => exported.file === key || keyOf(exported) === key))
    expect(stale, `Take these lines out of \`helpers\`: ${stale.join(', ')}`).toEqual([])
    expect(cards.filter(isHelper).map(keyOf), 'A function with a card is no helper: take its line out of `helpers`').toEqual([])
  })

  it('are read with lines that go on, and with what is missing left empty', () => {
    const text = '/**\n * Prose.\n *\n * @card Height: how high.\n * @formula a\n *   + b\n *\n * More.\n */\nexport const height = (x: number) => x\n/** @card Bare */\nexport function bare() {}\n/** No card. */\nexport function plain() {}\n'
    expect(readCards('a.ts', text)).toMatchObject([
      { name: 'height', title: 'Height', gives: 'How high.', formula: 'a + b', source: '', file: 'a.ts' },
      { name: 'bare', title: 'Bare', gives: '' },
    ])
    expect(exportedFunctions('a.ts', text).map(keyOf)).toEqual(['a.ts height', 'a.ts bare', 'a.ts plain'])
  })
})
