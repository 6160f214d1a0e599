import { describe, expect, it } from 'vitest'
import { readElements } from '#shared/formats/elements/read-elements'
import { ELEMENT_NOTATIONS, writeElements } from '#shared/formats/elements/write/write-elements'
import { checkReading, dice, mutate } from './mutate'
import { NOW_MS, mustRead, readText, referenceBytes, referenceText } from './support'

const FILES = 10_000

/** The reference uploads, and the good sets once more in every notation, so that each has its share. */
function originals(): Uint8Array[] {
  const { files } = JSON.parse(referenceText('uploads/manifest.json')) as { files: { file: string, bytes: number }[] }
  const sets = mustRead(readText(referenceText('uploads/tle_good_3le.tle'))).sets.map(set => set.elements)
  const written = ELEMENT_NOTATIONS.map((notation) => {
    const file = writeElements(sets, notation, { createdMs: NOW_MS, originator: 'REF' })
    if (!file.ok) throw new Error(file.reason)
    return new TextEncoder().encode(file.text)
  })
  return [...files.filter(({ bytes }) => bytes < 20_000).map(({ file }) => referenceBytes(`uploads/${file}`)), ...Array.from({ length: 8 }, () => written).flat()]
}

describe('10,000 mutated uploads', () => {
  it('never throw, give no number that is none, name a line with each refusal, and take less than a second each', () => {
    const files = originals()
    const roll = dice(20261130)
    const outcomes = new Map<string, number>()
    let slowest = 0
    for (let i = 0; i < FILES; i++) {
      const bytes = mutate(files[roll(files.length)]!, roll)
      const from = performance.now()
      const reading = readElements(bytes, { nowMs: NOW_MS })
      slowest = Math.max(slowest, performance.now() - from)
      checkReading(reading)
      const outcome = reading.kind === 'read' ? reading.format : reading.errors[0]!.code
      outcomes.set(outcome, (outcomes.get(outcome) ?? 0) + 1)
    }
    // The mutations must leave enough whole, and break enough, for the test to mean something.
    for (const format of ['tle', 'omm-kvn', 'omm-xml', 'omm-json', 'omm-csv']) expect(outcomes.get(format) ?? 0, format).toBeGreaterThan(40)
    for (const code of ['xml', 'xml-dtd', 'json', 'duplicate-keyword', 'missing', 'number', 'checksum', 'columns']) expect(outcomes.get(code) ?? 0, code).toBeGreaterThan(10)
    expect(slowest).toBeLessThan(1000)
  }, 60_000)
})
