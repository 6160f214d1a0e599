import { parseDecimal, parseWhole } from '../decimal'
import type { Warn } from '../reading'
import { SetRefusal } from '../reading'
import { quote } from '../show-value'
import { isUnitOf, ommKeyword, spellKeyword } from './keywords'

/** One keyword of a message with its value, in whatever notation it stood. */
export interface OmmEntry {
  readonly key: string
  readonly line: number
  /** Text or a number's text; null when it is stated to be missing. */
  readonly value: string | null
  /** As written beside the value. */
  readonly unit?: string
  /** What stands there where neither a text nor a number does: "true or false", "an object". */
  readonly odd?: string
}

/**
 * The keywords of one OMM, by name, each with its line. Null and empty text count as missing, never as zero. Keywords
 * in small letters are read as capitals, with a warning.
 */
export class OmmFields {
  private readonly byKey = new Map<string, OmmEntry>()

  /** @throws SetRefusal when a keyword stands twice (comments may) */
  constructor(entries: readonly OmmEntry[], private readonly line: number, warn: Warn) {
    let small: OmmEntry | null = null
    for (const entry of entries) {
      if (entry.key === 'COMMENT') continue
      const spelled = spellKeyword(entry.key)
      if (spelled !== null && spelled !== entry.key) small ??= entry
      const key = spelled ?? entry.key
      const before = this.byKey.get(key)
      if (before) {
        const where = before.line === entry.line ? `both times on line ${entry.line}` : `at lines ${before.line} and ${entry.line}`
        throw new SetRefusal(entry.line, 'duplicate-keyword', `${quote(key)} stands twice in this set, ${where}, and nothing says which is meant. Remove one.`)
      }
      this.byKey.set(key, entry)
    }
    if (small) warn(small.line, 'lower-case', `${quote(small.key)} is in small letters: keywords are written in capitals. It is read as ${small.key.toUpperCase()}, and others like it. Nothing needs to be done.`)
  }

  lineOf(key: string): number {
    return this.byKey.get(key)?.line ?? this.line
  }

  /** Text or a number's text; null when missing. */
  text(key: string): string | null {
    const entry = this.byKey.get(key)
    if (!entry) return null
    if (entry.odd) throw new SetRefusal(entry.line, 'type', `${key} is ${entry.odd}: a number or a text belongs there. Correct it.`)
    const text = entry.value?.trim() ?? ''
    return text === '' ? null : text
  }

  number(key: string): number | null {
    const text = this.text(key)
    if (text === null) return null
    const value = parseDecimal(text)
    if (value === null) throw new SetRefusal(this.lineOf(key), 'number', `${key} reads ${quote(text)}: a finite decimal number belongs there, with a point and nothing after it. ${commaHint(text)}Correct it or ask for this set again.`)
    this.checkUnit(key)
    return value
  }

  requiredNumber(key: string): number {
    return this.number(key) ?? this.missing(key, 'A missing value is not zero:')
  }

  requiredText(key: string, why = 'A missing value is not zero:'): string {
    return this.text(key) ?? this.missing(key, why)
  }

  /** A whole number from zero up; null when missing. */
  whole(key: string, digits: number): number | null {
    const text = this.text(key)
    if (text === null) return null
    const value = parseWhole(text, digits)
    if (value === null) throw new SetRefusal(this.lineOf(key), 'number', `${key} reads ${quote(text)}: a whole number of up to ${digits} digits belongs there. Correct it, or leave the keyword out.`)
    this.checkUnit(key)
    return value
  }

  /** Keywords that the standard does not know, those that a sender defines apart. */
  unknown(): OmmEntry[] {
    return [...this.byKey].filter(([key, entry]) => !ommKeyword(key) && !key.toUpperCase().startsWith('USER_DEFINED') && entry.value !== '').map(([, entry]) => entry)
  }

  private checkUnit(key: string): void {
    const entry = this.byKey.get(key)
    if (entry?.unit === undefined || isUnitOf(key, entry.unit)) return
    const units = ommKeyword(key)?.units ?? []
    const rule = units.length === 0 ? 'it has no unit' : `it is given in ${units.join(' or ')}`
    throw new SetRefusal(entry.line, 'unit', `${key} is given in ${quote(entry.unit)}, but ${rule}. Convert the value and correct the unit.`)
  }

  private missing(key: string, why: string): never {
    const written = this.byKey.get(key)
    const where = written ? 'empty' : 'missing from the set that begins here'
    throw new SetRefusal(written?.line ?? this.line, 'missing', `${key} is ${where}. ${why} ${written ? 'fill it in' : 'add it'} or ask for this set again from its source.`)
  }
}

/** Said where a comma stands in place of the decimal point. */
export const commaHint = (text: string): string => /^[^,]{1,40},\d/.test(text) ? 'It has a decimal comma. ' : ''
