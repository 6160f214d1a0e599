export type DecodedText =
  | { readonly ok: true, readonly text: string }
  | { readonly ok: false, readonly code: string, readonly message: string }

const startsWith = (bytes: Uint8Array, ...head: number[]) => head.every((byte, i) => bytes[i] === byte)

/** What a binary file says it is in its first bytes. */
function knownBinary(bytes: Uint8Array): string | null {
  if (startsWith(bytes, 0x50, 0x4B, 0x03, 0x04)) return 'a ZIP archive or an office document'
  if (startsWith(bytes, 0x1F, 0x8B)) return 'a gzip archive'
  if (startsWith(bytes, 0x28, 0xB5, 0x2F, 0xFD)) return 'a Zstandard archive'
  if (startsWith(bytes, 0x37, 0x7A, 0xBC, 0xAF)) return 'a 7z archive'
  if (startsWith(bytes, 0x25, 0x50, 0x44, 0x46, 0x2D)) return 'a PDF document'
  if (startsWith(bytes, 0x89, 0x50, 0x4E, 0x47) || startsWith(bytes, 0xFF, 0xD8, 0xFF)) return 'a picture'
  return null
}

/**
 * The text of an upload: UTF-8 with or without byte-order mark, UTF-16 with one. Bytes that are not UTF-8 become U+FFFD
 * (a name may hold them; a number that does is refused later). Anything with a zero character is no text and is refused.
 */
export function decodeText(bytes: Uint8Array): DecodedText {
  const binary = knownBinary(bytes)
  if (binary) return { ok: false, code: 'binary', message: `The file looks like ${binary}, not like text. Unpack it, or save the element sets as plain text, and upload that.` }
  const encoding = startsWith(bytes, 0xFF, 0xFE) ? 'utf-16le' : startsWith(bytes, 0xFE, 0xFF) ? 'utf-16be' : 'utf-8'
  const text = new TextDecoder(encoding).decode(bytes)
  if (text.includes('\0')) {
    return { ok: false, code: 'binary', message: 'The file holds zero bytes, so it is binary, or UTF-16 without a byte-order mark. Save it as UTF-8 text and upload that.' }
  }
  return { ok: true, text }
}
