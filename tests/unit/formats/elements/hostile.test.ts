import { describe, expect, it } from 'vitest'
import type { ElementReading } from '#shared/formats/elements/read-elements'
import { readElements } from '#shared/formats/elements/read-elements'
import { LINE_1, LINE_2, NOW_MS, mustRead, mustRefuse, omm, put, readText, referenceBytes, referenceText } from './support'

const read = (bytes: Uint8Array) => readElements(bytes, { nowMs: NOW_MS })
const ascii = (text: string) => new TextEncoder().encode(text)
const timed = <T>(run: () => T): [T, number] => {
  const from = performance.now()
  return [run(), performance.now() - from]
}

/** What must hold whatever was read: finite numbers, whole microseconds, notes that a person can act on. */
function checkReading(reading: ElementReading): void {
  const notes = reading.kind === 'read' ? [...reading.refusals, ...reading.warnings] : reading.errors
  for (const note of notes) {
    expect(Number.isInteger(note.line) && note.line >= 1).toBe(true)
    expect(note.message.length).toBeGreaterThan(20)
    expect(note.message.length).toBeLessThan(500)
    expect(note.message).not.toMatch(/undefined|NaN is|\[object/)
  }
  if (reading.kind === 'refused') {
    expect(reading.errors.length).toBeGreaterThan(0)
    return
  }
  for (const { elements: e, contentKey, text } of reading.sets) {
    for (const value of Object.values(e)) if (typeof value === 'number') expect(Number.isFinite(value)).toBe(true)
    expect(Number.isSafeInteger(e.epochUtcUs)).toBe(true)
    expect(e.eccentricity >= 0 && e.eccentricity < 1 && e.meanMotionRevPerDay > 0 && e.meanMotionRevPerDay <= 17.5 && e.inclinationDeg >= 0 && e.inclinationDeg <= 180).toBe(true)
    expect(contentKey).not.toContain('NaN')
    expect(text).not.toContain('\0')
  }
}

/** Repeatable numbers in [0, n): a linear congruence modulo 2^32 with the constants of Numerical Recipes. */
function dice(seed: number) {
  let state = seed >>> 0
  return (n: number) => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0
    return Math.floor(state / 2 ** 32 * n)
  }
}

const TOKENS = ['-', '.', ' ', '\t', '\n', '\r', '"', '{', '}', '[', ']', ',', ':', '\\u0000', '\\', 'null', '1e999', 'NaN', '\u2212', '\u00A0', '1 ', '2 ', '\0', '=', '<', '9999999999', 'EPOCH', '__proto__'].map(ascii)

function mutate(original: Uint8Array, roll: (n: number) => number): Uint8Array {
  let bytes = Array.from(original)
  for (let change = 0; change <= roll(4); change++) {
    const at = roll(bytes.length + 1)
    const kind = roll(5)
    if (kind === 0 && bytes.length > 0) bytes[Math.min(at, bytes.length - 1)] = roll(256)
    else if (kind === 1) bytes.splice(at, 1 + roll(20))
    else if (kind === 2) bytes.splice(at, 0, ...TOKENS[roll(TOKENS.length)]!)
    else if (kind === 3) bytes.splice(at, 0, ...bytes.slice(at, at + roll(120)))
    else bytes = bytes.slice(0, at)
  }
  return Uint8Array.from(bytes)
}

describe('hostile uploads', () => {
  it('never throw, never give a number that is none, and each is quick, over 2,000 mutated examples', () => {
    const files = (JSON.parse(referenceText('uploads/manifest.json')) as { files: { file: string, bytes: number }[] }).files.filter(f => f.bytes < 20_000).map(f => referenceBytes(`uploads/${f.file}`))
    const roll = dice(20261130)
    const outcomes = { read: 0, refused: 0 }
    let slowest = 0
    for (let i = 0; i < 2000; i++) {
      const [reading, ms] = timed(() => read(mutate(files[roll(files.length)]!, roll)))
      checkReading(reading)
      outcomes[reading.kind]++
      slowest = Math.max(slowest, ms)
    }
    expect(outcomes.read).toBeGreaterThan(200)
    expect(outcomes.refused).toBeGreaterThan(200)
    expect(slowest).toBeLessThan(250)
  })

  const long = 100_000
  it.each<[string, string]>([
    ['blanks', ' '.repeat(long)], ['a line of digits', `1 ${'1'.repeat(long)}`], ['digits and blanks', '1 1 '.repeat(long / 4)], ['a name of blanks', `a${' '.repeat(long)}b\n${LINE_1}\n${LINE_2}`],
    ['a data line with a long tail', `${LINE_1}${' '.repeat(long)}x\n${LINE_2}`], ['points', '.'.repeat(long)], ['brackets', '['.repeat(long)], ['braces', '{"a":'.repeat(long / 5)], ['an open string', `["${'a'.repeat(long)}`], ['backslashes', `["${'\\'.repeat(long)}"]`],
    ['a long number', `[{"EPOCH":"2026-11-30T00:00:00","MEAN_MOTION":${'9'.repeat(long)}}]`], ['a long numeric text', omm({ MEAN_MOTION: '1'.repeat(99_000) })], ['a long epoch', omm({ EPOCH: `2026-11-30T00:00:00.${'0'.repeat(99_000)}` })], ['a text of exponents', omm({ BSTAR: '1e'.repeat(40_000) })],
    ['keywords without an end', 'A'.repeat(long)], ['underscores and equals', `${'_'.repeat(long)}=`], ['commas', ','.repeat(long)], ['angle brackets', '<'.repeat(long)], ['a namespace', `<${'a'.repeat(long)}:omm>`], ['one set a thousand times', `${LINE_1}\n${LINE_2}\n`.repeat(700)], ['line ends', '\r\n'.repeat(long / 2)],
    ['half surrogates', omm({ OBJECT_NAME: '\uD800'.repeat(15_000) })], ['first lines only', `${LINE_1}\n`.repeat(1400)], ['second lines only', `${LINE_2}\n`.repeat(1400)],
  ])('of 100 KB are answered within 50 ms: %s', (_, text) => {
    const bytes = ascii(text)
    let best = Infinity
    for (let i = 0; i < 3; i++) {
      const [reading, ms] = timed(() => read(bytes))
      best = Math.min(best, ms)
      checkReading(reading)
    }
    expect(best).toBeLessThan(50)
  })

  it('are refused with what they look like', () => {
    const whole: [string, Uint8Array, RegExp][] = [
      ['binary', Uint8Array.of(0x50, 0x4B, 3, 4, 9, 9), /ZIP/], ['binary', Uint8Array.of(0x1F, 0x8B, 8, 0), /gzip/], ['binary', ascii('%PDF-1.7'), /PDF/], ['binary', Uint8Array.of(0x31, 0, 0x20, 0), /UTF-16 without a byte-order mark/],
      ['html', ascii('\n <HTML lang="en">'), /web page/], ['missing', ascii('<omm/>'), /CENTER_NAME is missing/], ['xml-root', ascii('<?xml version="1.0"?><svg/>'), /<svg>, which is neither an OMM/], ['kvn', ascii('CCSDS_TDM_VERS = 2.0\n'), /CCSDS TDM in KVN/], ['missing', ascii('OBJECT_NAME = A\n'), /CENTER_NAME is missing/],
      ['csv-header', ascii('a,b,c,d,e,f,g,h,i,j\n'), /does not name the columns/], ['missing', ascii('EPOCH;MEAN_MOTION;X\n'), /header row lacks ECCENTRICITY/],
      ['unknown-format', ascii('Dear all,\nplease find attached'), /begins with "Dear all,"/], ['empty', new Uint8Array(), /empty/],
    ]
    for (const [code, bytes, naming] of whole) {
      const { errors, detail } = mustRefuse(read(bytes))
      expect(errors[0]!.code).toBe(code)
      expect(detail).toMatch(naming)
    }
  })

  it('cut in the middle of JSON are refused whole, with the place', () => {
    const text = `[\n${omm()},\n${omm().slice(0, 50)}`
    expect(mustRefuse(readText(text)).errors[0]).toMatchObject({ code: 'json', line: 3 })
  })

  it('whose name begins with a bracket or a tag are still element sets', () => {
    for (const name of ['[A]', '{B}', '<img src=x>', 'A,B,C,D,E,F,G,H,I,J,K', 'EPOCH = 1']) expect(mustRead(readText(`${name}\n${LINE_1}\n${LINE_2}`)).sets[0]!.elements.name).toBe(name)
  })

  it('of 20,000 sets are read in well under five seconds, in either notation', () => {
    const numbers = Array.from({ length: 20_000 }, (_, i) => String(10_000 + i))
    const tle = ascii(numbers.map(n => `SET ${n}\n${put(LINE_1, 3, n)}\n${put(LINE_2, 3, n)}`).join('\n'))
    const json = ascii(`[${numbers.map(n => omm({ NORAD_CAT_ID: Number(n) })).join(',\n')}]`)
    for (const bytes of [tle, json]) {
      const [reading, ms] = timed(() => read(bytes))
      expect(mustRead(reading).sets).toHaveLength(20_000)
      expect(mustRead(reading).warnings).toEqual([])
      expect(ms).toBeLessThan(2500)
    }
  })
})
