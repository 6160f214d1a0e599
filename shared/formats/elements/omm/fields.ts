import { parseDecimal, parseWhole } from '../decimal'
import type { JsonMember, JsonObject } from '../json/json-value'
import { SetRefusal } from '../reading'
import { quote } from '../show-value'

/** The keywords of one OMM, by name, each with its line. Null and empty text count as missing, never as zero. */
export class OmmFields {
  private readonly byKey = new Map<string, JsonMember>()

  /** @throws SetRefusal when a keyword stands twice (comments may) */
  constructor(private readonly object: JsonObject) {
    for (const member of object.members) {
      if (member.key === 'COMMENT') continue
      const before = this.byKey.get(member.key)
      if (before) {
        const where = before.line === member.line ? `both times on line ${member.line}` : `at lines ${before.line} and ${member.line}`
        throw new SetRefusal(member.line, 'duplicate-keyword', `${quote(member.key)} stands twice in this set, ${where}, and nothing says which is meant. Remove one.`)
      }
      this.byKey.set(member.key, member)
    }
  }

  lineOf(key: string): number {
    return this.byKey.get(key)?.line ?? this.object.line
  }

  /** Text or a number's text; null when missing. */
  text(key: string): string | null {
    const value = this.byKey.get(key)?.value
    if (!value || value.kind === 'null') return null
    if (value.kind === 'number') return value.text
    if (value.kind !== 'string') throw new SetRefusal(this.lineOf(key), 'type', `${key} is ${value.kind === 'boolean' ? 'true or false' : `an ${value.kind}`}: a number or a text belongs there. Correct it.`)
    const text = value.value.trim()
    return text === '' ? null : text
  }

  number(key: string): number | null {
    const text = this.text(key)
    if (text === null) return null
    const value = parseDecimal(text)
    if (value === null) throw new SetRefusal(this.lineOf(key), 'number', `${key} reads ${quote(text)}: a finite decimal number belongs there, with a point and nothing after it. Correct it or ask for this set again.`)
    return value
  }

  requiredNumber(key: string): number {
    return this.number(key) ?? this.missing(key)
  }

  requiredText(key: string): string {
    return this.text(key) ?? this.missing(key)
  }

  /** A whole number from zero up; null when missing. */
  whole(key: string, digits: number): number | null {
    const text = this.text(key)
    if (text === null) return null
    const value = parseWhole(text, digits)
    if (value === null) throw new SetRefusal(this.lineOf(key), 'number', `${key} reads ${quote(text)}: a whole number of up to ${digits} digits belongs there. Correct it, or leave the keyword out.`)
    return value
  }

  private missing(key: string): never {
    const written = this.byKey.get(key)
    if (written) throw new SetRefusal(written.line, 'missing', `${key} is empty. A missing value is not zero: fill it in or ask for this set again from its source.`)
    for (const [other, member] of this.byKey) {
      if (other.toUpperCase() === key) throw new SetRefusal(member.line, 'missing', `${key} is missing, but ${quote(other)} is there: keywords are written in capitals. Correct the keyword.`)
    }
    throw new SetRefusal(this.object.line, 'missing', `${key} is missing from the set that begins here. A missing value is not zero: add it or ask for this set again from its source.`)
  }
}
