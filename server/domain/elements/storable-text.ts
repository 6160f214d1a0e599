import type { LineNote } from '#shared/formats/elements/read-elements'

/** PostgreSQL holds neither NUL nor halves of surrogate pairs; the upload's original keeps them. */
export const storableText = (text: string): string => text.replaceAll('\u0000', '\uFFFD').toWellFormed()

export function storableNote(note: LineNote): LineNote {
  return { ...note, message: storableText(note.message), ...(note.name === undefined ? {} : { name: storableText(note.name) }) }
}

/** The name that a sender gave a file: shown, never used as a path. Null when nothing is left. */
export function displayFileName(raw: string | null | undefined): string | null {
  // eslint-disable-next-line no-control-regex
  const name = (raw ?? '').toWellFormed().replace(/^.*[\\/]/s, '').replace(/[\u0000-\u001F\u007F-\u009F\u200E\u200F\u2028-\u202E\u2066-\u2069]/g, '').trim()
  return name === '' ? null : [...name].slice(0, 120).join('')
}
