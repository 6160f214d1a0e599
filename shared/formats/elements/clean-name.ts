import type { Warn } from './reading'

/** Names longer than this are cut for display; the original text keeps them whole. */
export const LONGEST_NAME = 100

/** Controls, bidirectional overrides and halves of surrogate pairs: they break layouts, databases or UTF-8. */
function mayStand(codePoint: number): boolean {
  if (codePoint < 0x20 || (codePoint >= 0x7F && codePoint < 0xA0)) return false
  if (codePoint === 0x2028 || codePoint === 0x2029) return false
  if ((codePoint >= 0x202A && codePoint <= 0x202E) || (codePoint >= 0x2066 && codePoint <= 0x2069)) return false
  return codePoint < 0xD800 || codePoint > 0xDFFF
}

/**
 * A name fit to be stored and shown: trimmed, unprintable characters replaced by U+FFFD, cut to 100 characters.
 * What was changed is said in a warning. Null when nothing is left.
 */
export function cleanName(raw: string, line: number, warn: Warn): string | null {
  const trimmed = raw.trim()
  if (trimmed === '') return null
  let name = ''
  let replaced = false
  let cut = false
  for (const character of trimmed) {
    if (name.length + character.length > LONGEST_NAME) {
      cut = true
      break
    }
    const stands = mayStand(character.codePointAt(0) ?? 0)
    name += stands ? character : '\uFFFD'
    replaced ||= !stands
  }
  if (cut) warn(line, 'name-cut', `The name has ${trimmed.length} characters; it is shown cut to the first ${LONGEST_NAME}. Shorten it if that is not wanted.`)
  if (replaced) warn(line, 'name-characters', 'The name holds unprintable characters; each is shown as U+FFFD. Remove them if the name matters.')
  else if (name.includes('\uFFFD')) warn(line, 'name-encoding', 'The name holds bytes that are not UTF-8; each is shown as U+FFFD. Save the file as UTF-8 if the name matters.')
  return name
}
