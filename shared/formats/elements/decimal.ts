const LONGEST_NUMBER = 64
const DECIMAL = /^[+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d{1,6})?$/

/**
 * A decimal number, read strictly: digits, one point, an exponent, nothing else (no trailing text, no blanks inside,
 * no NaN, no Infinity, no hexadecimal). Null when it is not one or does not fit a double. Never −0.
 */
export function parseDecimal(text: string): number | null {
  if (text.length > LONGEST_NUMBER || !DECIMAL.test(text)) return null
  const value = Number(text)
  return Number.isFinite(value) ? value + 0 : null
}

/** A whole number without sign, of at most `digits` digits; null when it is not one. */
export function parseWhole(text: string, digits: number): number | null {
  if (text.length === 0 || text.length > digits) return null
  for (let i = 0; i < text.length; i++) {
    const code = text.charCodeAt(i)
    if (code < 0x30 || code > 0x39) return null
  }
  return Number(text)
}
