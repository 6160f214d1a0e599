import { describe, expect, it } from 'vitest'
import type { JsonLimits, JsonValue } from '#shared/formats/elements/json/json-value'
import { JsonError } from '#shared/formats/elements/json/json-value'
import { readJsonItems } from '#shared/formats/elements/json/strict-json'

const limits: JsonLimits = { depth: 8, members: 20, characters: 200 }

/** As JSON.parse would give it; keys are written as entries, so that none reaches a prototype. */
function plain(value: JsonValue): unknown {
  if (value.kind === 'null') return null
  if (value.kind === 'number') return Number(value.text)
  if (value.kind === 'array') return value.items.map(plain)
  if (value.kind === 'object') return Object.fromEntries(value.members.map(m => [m.key, plain(m.value)]))
  return value.value
}
const read = (text: string) => [...readJsonItems(text, limits)]
const failure = (text: string): JsonError => {
  try {
    read(text)
  }
  catch (error) {
    if (error instanceof JsonError) return error
    throw error
  }
  throw new Error('read without an error')
}

describe('the strict JSON reader', () => {
  it.each([
    '[]', '[ ]', '[{}]', '[1,-0,0.5,1e5,-1.25E-3,123456789012345678901234567890]', '["", "a\\u00e9\\n\\t\\"\\\\\\/\\b\\f\\r", "\\ud83d\\ude00", "é😀"]', '[true,false,null,[[]],{"a":{"b":[1,{"c":null}]}}]', ' \r\n\t[ 1 , 2 ] \n',
  ])('agrees with JSON.parse on %s', (text) => {
    // Source: the runtime's own JSON.parse (ECMAScript, RFC 8259).
    expect(read(text).map(plain)).toEqual(JSON.parse(text))
  })

  it('hands out the items of an array one by one, and a single value as itself', () => {
    expect(read('{"a":1}').map(plain)).toEqual([{ a: 1 }])
    const items = readJsonItems('[1, 2, oops]', limits)
    expect([items.next().value, items.next().value]).toMatchObject([{ text: '1' }, { text: '2' }])
    expect(() => items.next()).toThrow(JsonError)
  })

  it.each([
    '', ' ', '[', ']', '[1', '[1,', '[1,]', '[,1]', '[1 2]', '{', '{"a"', '{"a":', '{"a":1', '{"a":1,', '{"a":1,}', '{a:1}', '{\'a\':1}', '{"a" 1}', '[01]', '[1.]', '[.5]', '[+1]', '[1e]', '[0x10]', '[1_0]', '[--1]', '["a]', '["\n"]', '["\\x"]', '["\\u12g4"]', '["\\u12"]',
    '[tru]', '[True]', '[nul]', '[undefined]', '[1] 2', '[1]]', '{}{}', '[1;2]', '["a" "b"]', '/* c */[1]', '[1] // c', '\u00A0[1]',
  ])('refuses %j as JSON.parse does', (text) => {
    expect(() => { JSON.parse(text) }).toThrow(SyntaxError)
    expect(failure(text).code).toBe('json')
  })

  it('says line and column, whatever the line ends', () => {
    for (const end of ['\n', '\r\n', '\r']) expect(failure(`[${end}${end}  {"a": x}]`)).toMatchObject({ line: 3, column: 9 })
    expect(failure('[1,\n 2').message).toContain('the end of the file')
  })

  it('knows where each value begins and ends, and keeps repeated keys', () => {
    const text = '[\n {"a": 1,\n  "a": 2}]'
    const [object] = read(text)
    expect(object).toMatchObject({ kind: 'object', line: 2, members: [{ key: 'a', line: 2, value: { text: '1' } }, { key: 'a', line: 3, value: { text: '2' } }] })
    expect(text.slice(object!.start, object!.end)).toBe('{"a": 1,\n  "a": 2}')
  })

  it('stops at each of its limits', () => {
    expect(failure('[['.repeat(5)).code).toBe('json-limit')
    expect(read('[[[[[[[[[]]]]]]]]]')).toHaveLength(1)
    expect(failure(`[{${Array.from({ length: 21 }, (_, i) => `"k${i}":1`).join(',')}}]`).code).toBe('json-limit')
    expect(failure(`[[${Array.from({ length: 21 }, () => 1).join(',')}]]`).code).toBe('json-limit')
    expect(failure(`["${'a'.repeat(202)}"]`).code).toBe('json-limit')
    expect(failure(`[${'1'.repeat(202)}]`).code).toBe('json-limit')
  })
})
