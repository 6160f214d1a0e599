import { expect } from 'vitest'
import type { ElementReading } from '#shared/formats/elements/read-elements'

const ascii = (text: string) => new TextEncoder().encode(text)

/** What must hold whatever was read: finite numbers, whole microseconds, notes that a person can act on. */
export function checkReading(reading: ElementReading): void {
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
export function dice(seed: number) {
  let state = seed >>> 0
  return (n: number) => {
    state = (Math.imul(state, 1664525) + 1013904223) >>> 0
    return Math.floor(state / 2 ** 32 * n)
  }
}

const TOKENS = ['-', '.', ' ', '\t', '\n', '\r', '"', '{', '}', '[', ']', ',', ':', '\\u0000', '\\', 'null', '1e999', 'NaN', '\u2212', '\u00A0', '1 ', '2 ', '\0', '=', '<', '>', '</', '/>', '<omm>', '</omm>', '&', '&amp;', '&#0;', '&x;', '<!--', '-->', '<![CDATA[', ']]>', '<!DOCTYPE a>', '<?', ';', '\n"', ' [deg]', 'CCSDS_OMM_VERS = 3.0\n', 'COMMENT ', '9999999999', 'EPOCH', '__proto__'].map(ascii)

export function mutate(original: Uint8Array, roll: (n: number) => number): Uint8Array {
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
