import ts from 'typescript'
import { describe, expect, it } from 'vitest'
import { sourceFiles } from '../../support/source-files'

interface Pattern { readonly where: string, readonly pattern: RegExp }

/** Every regular expression that stands in a source file, as the compiler sees it. */
function patternsOf(path: string, text: string): Pattern[] {
  const found: Pattern[] = []
  const visit = (node: ts.Node) => {
    if (ts.isRegularExpressionLiteral(node)) {
      const [, body, flags] = /^\/(.*)\/([a-z]*)$/s.exec(node.text)!
      found.push({ where: `${path}: ${node.text}`, pattern: new RegExp(body!, flags) })
    }
    ts.forEachChild(node, visit)
  }
  visit(ts.createSourceFile(path, text, ts.ScriptTarget.ESNext))
  return found
}

const LENGTH = 100_000
const fill = (unit: string) => unit.repeat(Math.ceil(LENGTH / unit.length)).slice(0, LENGTH)
const PIECES = ['a', 'A', '0', '9', ' ', '\t', '\n', '\r\n', '.', ',', '-', '+', '=', '_', ':', '"', '\'', '<', '>', '&', '/', '*', '[', ']', '(', '{', 'e', '0.', '1e', 'a ', ' a', 'a.', 'A_', '1 ', '1,', ' \t', 'a=', '-0', '\u00E9', '\u2212', '\uD800', '2026-11-30T', '00:', 'EPOCH', ' encoding=', '* ', '@a ']
const ENDS = ['', '!', ' ', 'a', '0', '\n', '\u0000', '"', ']', '=']
/** What a pattern may want to see first, so that it gets to its repetitions. */
const BEGINNINGS = ['', 'a', '0', '-', '<', '<?xml', '"', ' ', '2026-11-30T00:00:00.', '{', '\'', '.']

const patterns = sourceFiles('shared/formats').flatMap(({ path, text }) => patternsOf(path, text))

const LIMIT_MS = 50

/** The best of up to three runs, since other work may stand in the way of one. */
function timeOf(pattern: RegExp, text: string): number {
  let best = Infinity
  for (let run = 0; run < 3 && best >= LIMIT_MS; run++) {
    pattern.lastIndex = 0
    const from = performance.now()
    pattern.test(text)
    best = Math.min(best, performance.now() - from)
  }
  return best
}

/** The first text on which it is slow; null where it never is. */
function slowOn(pattern: RegExp): string | null {
  for (const piece of PIECES) {
    for (const [i, beginning] of BEGINNINGS.entries()) {
      const text = beginning + fill(piece) + ENDS[i % ENDS.length]!
      if (timeOf(pattern, text) >= LIMIT_MS) return JSON.stringify(text.slice(0, 40))
    }
  }
  return null
}

describe('every regular expression of the formats', () => {
  it('is found', () => {
    expect(patterns.length).toBeGreaterThan(20)
    expect(patternsOf('a.ts', 'const a = /b+/g.test("/c/")').map(({ where }) => where)).toEqual(['a.ts: /b+/g'])
  })

  it.each(patterns)('answers 100 KB of hostile text within 50 ms: $where', ({ pattern }) => {
    expect(slowOn(pattern), 'slow on this text: bound its repetitions, or let them not overlap').toBeNull()
  })

  it('is told from one that is slow', () => {
    // Quadratic: each of the zeros is tried as the first.
    expect(timeOf(/0+$/, `${'0'.repeat(20_000)}!`)).toBeGreaterThan(LIMIT_MS)
    expect(timeOf(/0{1,6}$/, `${'0'.repeat(20_000)}!`)).toBeLessThan(LIMIT_MS)
  })
})
