const LONGEST_SHOWN = 40

const NAMES = new Map<number, string>([
  [0x09, 'a tab'],
  [0x20, 'a blank'],
  [0x2C, 'a comma'],
  [0xA0, 'a no-break space (U+00A0)'],
  [0x2212, 'a minus sign U+2212'],
  [0x2013, 'a dash (U+2013)'],
  [0x2014, 'a dash (U+2014)'],
  [0x202F, 'a narrow no-break space (U+202F)'],
  [0xFFFD, 'a byte that is not UTF-8'],
])

/** A character in words, so that a reader can find it: "a tab", "the letter O", "U+2009". */
export function describeCharacter(code: number): string {
  const named = NAMES.get(code)
  if (named) return named
  const isLetter = (code >= 0x41 && code <= 0x5A) || (code >= 0x61 && code <= 0x7A)
  if (isLetter) return `the letter ${String.fromCharCode(code)}`
  if (code > 0x20 && code < 0x7F) return `"${String.fromCharCode(code)}"`
  return `the character U+${code.toString(16).toUpperCase().padStart(4, '0')}`
}

/** A value quoted for a message: at most 40 characters, nothing that moves a cursor or breaks a line. */
export function quote(value: string): string {
  let shown = ''
  for (let i = 0; i < value.length && i < LONGEST_SHOWN; i++) {
    const code = value.charCodeAt(i)
    const unsafe = code < 0x20 || (code >= 0x7F && code < 0xA0) || (code >= 0x2028 && code <= 0x202E) || (code >= 0x2066 && code <= 0x2069) || (code >= 0xD800 && code <= 0xDFFF)
    shown += unsafe ? '\uFFFD' : value[i]
  }
  return `"${shown}${value.length > LONGEST_SHOWN ? '…' : ''}"`
}
