import { cleanName } from '../clean-name'
import type { Line } from '../lines'
import { contentLines } from '../lines'
import type { Warn } from '../reading'
import { quote } from '../show-value'
import type { SetCollector } from '../set-collector'
import { whichDataLine } from './data-line'
import { parseTleSet } from './parse-set'

interface NamedLine { readonly line: Line, readonly name: string | null, readonly notes: readonly Parameters<Warn>[] }

/** A name line; the leading "0 " of the three-line notation is no part of the name. */
function takeName(line: Line | null): { name: string | null, notes: Parameters<Warn>[] } {
  if (!line) return { name: null, notes: [] }
  const notes: Parameters<Warn>[] = []
  const raw = line.text.startsWith('0 ') ? line.text.slice(2) : line.text
  return { name: cleanName(raw, line.number, (...note) => { notes.push(note) }), notes }
}

/**
 * Reads two- and three-line element sets. A line that is no data line is the name of the set that follows it; one that
 * no set follows is named in a warning. A set that lacks one of its lines is refused and the next one read.
 */
export function readTle(text: string, collector: SetCollector): void {
  let nameLine: Line | null = null
  let first: NamedLine & { readonly start: number } | null = null
  let stray: { from: number, to: number, text: string } | null = null

  const loseName = () => {
    if (nameLine) stray = { from: stray?.from ?? nameLine.number, to: nameLine.number, text: stray?.text ?? nameLine.text }
    nameLine = null
  }
  const tellStray = () => {
    if (stray) {
      const which = stray.from === stray.to ? 'The line' : `Lines ${stray.from} to ${stray.to}`
      const verb = stray.from === stray.to ? 'is' : 'are'
      collector.warn(stray.from, 'stray-line', `${which} (${quote(stray.text.trim())}) ${verb} no part of an element set and ${stray.from === stray.to ? 'was' : 'were'} left out. Remove what does not belong.`)
    }
    stray = null
  }
  const refuseHalf = () => {
    if (first) collector.refuse(first.line.number, first.name, 'missing-line-2', 'Line 1 has no line 2 after it. Add its line 2, or remove it.')
    first = null
  }

  for (const line of contentLines(text)) {
    const which = whichDataLine(line.text)
    if (which === null) {
      refuseHalf()
      loseName()
      nameLine = line
      continue
    }
    tellStray()
    if (which === 1) {
      refuseHalf()
      first = { line, ...takeName(nameLine), start: (nameLine ?? line).start }
      nameLine = null
      continue
    }
    const opened: NamedLine & { readonly start: number } | null = first
    first = null
    if (!opened) {
      collector.refuse(line.number, takeName(nameLine).name, 'missing-line-1', 'Line 2 has no line 1 before it. Add its line 1, or remove it.')
      nameLine = null
      continue
    }
    collector.take({ line: opened.line.number, name: opened.name, text: () => text.slice(opened.start, line.end) }, (warn) => {
      for (const note of opened.notes) warn(...note)
      return parseTleSet(opened.name, opened.line, line, warn)
    })
  }
  refuseHalf()
  loseName()
  tellStray()
}
