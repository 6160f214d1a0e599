import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import { uploadLimitBytes } from '#shared/routes'
import { DomainError } from '~~/server/domain/errors'
import { contentType, readLimited } from './read-body'

export interface UploadBody {
  bytes: Buffer
  /** As the sender named it: to show, never to trust. */
  fileName: string | null
  /** Where problems of the content stand for the sender: the form's field, or the body. */
  path: 'file' | 'body'
  isFile: boolean
}

const bodyTypes = ['text/plain', 'application/json', 'application/xml', 'text/xml', 'text/csv']
/** What the parts of a form may add to its file. */
const formRoomBytes = 64 * 1024

/** The uploaded bytes: the field `file` of a multipart form, or the body itself. */
export async function readUploadBody(event: H3Event): Promise<UploadBody> {
  const type = contentType(event)
  if (bodyTypes.includes(type)) return { bytes: await readLimited(event, uploadLimitBytes), fileName: null, path: 'body', isFile: false }
  if (type !== 'multipart/form-data') throw new DomainError('wrong-type', 'Send a form (multipart/form-data) with the field file, or the element sets themselves as text/plain or application/json.')
  const form = await readForm(new Uint8Array(await readLimited(event, uploadLimitBytes + formRoomBytes)), getRequestHeader(event, 'content-type')!)
  const parts = form.getAll('file')
  const [file] = parts
  if (file === undefined || parts.length > 1) {
    const message = file === undefined ? 'Choose a file: the form has no field of this name.' : 'Send one file at a time.'
    throw new DomainError('not-valid', `file: ${message}`, [{ path: 'file', message }])
  }
  const bytes = typeof file === 'string' ? Buffer.from(file) : Buffer.from(await file.arrayBuffer())
  if (bytes.length > uploadLimitBytes) throw new DomainError('too-large', `At most ${uploadLimitBytes.toLocaleString('en-GB')} bytes are read here: send less, or in parts.`)
  return { bytes, fileName: typeof file === 'string' ? null : file.name, path: 'file', isFile: typeof file !== 'string' }
}

/** The platform's own reader of forms (WHATWG Fetch) on bytes that have been counted already. */
async function readForm(bytes: Uint8Array<ArrayBuffer>, type: string): Promise<FormData> {
  try {
    return await new Response(bytes, { headers: { 'content-type': type } }).formData()
  }
  catch {
    throw new DomainError('unreadable', 'The body is not a readable multipart form: check its boundary, and that it was sent whole.')
  }
}
