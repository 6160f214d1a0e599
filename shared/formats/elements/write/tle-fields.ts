/** A value as the columns of a TLE hold it, and whether that is less than the value. */
export interface TleField { readonly text: string, readonly isRounded: boolean }

/** Digits after a printed point, right-aligned; null when it does not fit. */
export function fixedField(value: number, width: number, decimals: number): TleField | null {
  const text = (value + 0).toFixed(decimals).padStart(width)
  return text.length > width ? null : { text, isRounded: Number(text) !== value }
}

/** Sign or blank and eight decimals without the zero before the point: ".00008123" behind a blank. */
export function derivativeField(value: number): TleField | null {
  const text = Math.abs(value).toFixed(8)
  if (!text.startsWith('0.')) return null
  const isNegative = value < 0 && Number(text) !== 0
  return { text: `${isNegative ? '-' : ' '}${text.slice(1)}`, isRounded: Number(text) !== Math.abs(value) }
}

/** Digits after an implied point; null when they round up to one. */
export function impliedField(value: number, digits: number): TleField | null {
  const text = value.toFixed(digits)
  return text.startsWith('0.') ? { text: text.slice(2), isRounded: Number(text) !== value } : null
}

/**
 * Sign, five digits after an implied point and a power of ten of one digit: 0.31234e-3 is " 31234-3". Values below that
 * lose digits; null for those above. Zero is written as " 00000-0", as published lines have it.
 */
export function powerField(value: number): TleField | null {
  const size = Math.abs(value)
  if (size === 0) return { text: ' 00000-0', isRounded: false }
  let [digits, power] = toPower(size)
  if (power < -9) {
    digits = Math.round(size / 1e-14)
    power = -9
    if (digits === 0) return { text: ' 00000-0', isRounded: true }
  }
  if (power > 9) return null
  const mantissa = String(digits).padStart(5, '0')
  const text = `${value < 0 ? '-' : ' '}${mantissa}${power > 0 ? '+' : '-'}${Math.abs(power)}`
  return { text, isRounded: Number(`0.${mantissa}e${power}`) !== size }
}

/** Five digits and the power that goes with them after an implied point. */
function toPower(size: number): [digits: number, power: number] {
  const [mantissa, power] = size.toExponential(4).split('e') as [string, string]
  return [Number(mantissa.replace('.', '')), Number(power) + 1]
}

/** Letters of Alpha-5 in order of value, 10 to 33. */
const LETTERS = 'ABCDEFGHJKLMNPQRSTUVWXYZ'

/** Five columns of a catalogue number, Alpha-5 above 99999; null above 339999. */
export function catalogueField(number: string): string | null {
  const value = Number(number)
  if (!/^\d{1,9}$/.test(number) || value > 339_999) return null
  return value <= 99_999 ? String(value).padStart(5, '0') : LETTERS[Math.floor(value / 10_000) - 10]! + String(value % 10_000).padStart(4, '0')
}
