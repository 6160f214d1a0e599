const PREDEFINED: Readonly<Record<string, string>> = { amp: '&', lt: '<', gt: '>', quot: '"', apos: '\'' }
const NUMERIC = /^#(?:(\d{1,7})|x([0-9A-Fa-f]{1,6}))$/

/** What a reference stands for, as XML 1.0 §4.1 and §4.6 have it; null for any that a DTD would have to declare. */
function meaningOf(reference: string): string | null {
  if (Object.hasOwn(PREDEFINED, reference)) return PREDEFINED[reference]!
  const found = NUMERIC.exec(reference)
  if (!found) return null
  const code = found[1] === undefined ? Number.parseInt(found[2]!, 16) : Number(found[1])
  return code === 0 || code > 0x10FFFF || (code >= 0xD800 && code <= 0xDFFF) ? null : String.fromCodePoint(code)
}

/**
 * Text with its references resolved: the five predefined ones and the numeric ones, each to one character, so that
 * nothing grows.
 * @param fail told where any other begins
 */
export function decodeReferences(raw: string, fail: (offset: number, what: string) => never): string {
  let value = ''
  let copied = 0
  for (let at = raw.indexOf('&'); at >= 0; at = raw.indexOf('&', copied)) {
    const end = raw.slice(at, at + 12).indexOf(';')
    const meaning = end < 0 ? null : meaningOf(raw.slice(at + 1, at + end))
    if (meaning === null) fail(at, 'An "&" begins no reference that is read (&amp; &lt; &gt; &quot; &apos; and numbers are; entities of a DTD are refused)')
    value += raw.slice(copied, at) + meaning
    copied = at + end + 1
  }
  return value + raw.slice(copied)
}
