import type { UploadBrief } from '#shared/schemas/elements'

const grouped = (count: number) => count.toLocaleString('en-GB').replaceAll(',', ' ')

/** Bytes as people name them. */
export function formatBytes(bytes: number): string {
  if (bytes < 10_000) return `${grouped(bytes)} bytes`
  return bytes < 1e6 ? `${Math.round(bytes / 1000)} kB` : `${(bytes / 1e6).toFixed(1)} MB`
}

export const sourceWords: Record<UploadBrief['source'], string> = { file: 'by file', paste: 'pasted', api: 'by a program', folder: 'from the watched folder', demo: 'with the demo' }

export const stateWords: Record<UploadBrief['state'], string> = { receiving: 'Being sent', reading: 'Being read', finished: 'Finished', cancelled: 'Cancelled', failed: 'Refused' }

export const nameOf = ({ fileName, source }: Pick<UploadBrief, 'fileName' | 'source'>): string => fileName ?? (source === 'paste' ? 'Pasted text' : 'Unnamed')

const notations: Record<string, string> = { 'tle': 'TLE', 'omm-kvn': 'OMM as KVN', 'omm-xml': 'OMM as XML', 'omm-json': 'OMM as JSON', 'omm-csv': 'OMM as CSV' }
export const notationWords = (format: string | null): string => format === null ? 'Notation not known' : notations[format] ?? format

/** What became of an upload, in a sentence. */
export function outcomeOf(upload: Pick<UploadBrief, 'state' | 'accepted' | 'alreadyHeld' | 'refused' | 'cancelling'>): string {
  const { state, accepted, alreadyHeld, refused, cancelling } = upload
  if (cancelling) return 'being cancelled.'
  if (state === 'receiving') return 'being sent.'
  if (state === 'reading') return 'being read and stored.'
  if (state === 'cancelled') return 'cancelled; nothing of it was kept.'
  if (state === 'failed') return 'refused; nothing of it was taken.'
  return `${grouped(accepted)} accepted, ${grouped(alreadyHeld)} already held, ${grouped(refused)} refused.`
}

/** Seconds that are left at the pace so far, in words; nothing until it can be told. */
export function leftInWords(share: number, elapsedS: number): string {
  if (share < 0.02 || elapsedS < 2) return ''
  const left = elapsedS * (1 - share) / share
  return left < 90 ? `about ${Math.max(1, Math.round(left))} s left` : `about ${Math.round(left / 60)} min left`
}
