import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import { uploadLimitBytes } from '#shared/routes'
import { DomainError } from '~~/server/domain/errors'
import { bodyPieces } from './body-pieces'
import { openFormFile } from './form-file'
import { contentType } from './read-body'

export interface UploadStream {
  readonly pieces: AsyncGenerator<Uint8Array>
  /** As the sender named it: to show, never to trust. */
  readonly fileName: string | null
  /** Where problems of the content stand for the sender: the form's field, or the body. */
  readonly path: 'file' | 'body'
  readonly isFile: boolean
}

const bodyTypes = ['text/plain', 'application/json', 'application/xml', 'text/xml', 'text/csv']
/** What the parts of a form may add to its file. */
const formRoomBytes = 64 * 1024

/** What is uploaded, as it comes: the field `file` of a multipart form, or the body itself. */
export async function openUpload(event: H3Event): Promise<UploadStream> {
  const type = contentType(event)
  if (bodyTypes.includes(type)) return { pieces: bodyPieces(event, uploadLimitBytes), fileName: null, path: 'body', isFile: false }
  if (type !== 'multipart/form-data') throw new DomainError('wrong-type', 'Send a form (multipart/form-data) with the field file, or the element sets themselves as text/plain, application/json, application/xml or text/csv.')
  const { pieces, fileName } = await openFormFile(getRequestHeader(event, 'content-type')!, bodyPieces(event, uploadLimitBytes + formRoomBytes))
  return { pieces: capped(pieces), fileName, path: 'file', isFile: fileName !== null }
}

async function* capped(pieces: AsyncGenerator<Uint8Array>): AsyncGenerator<Uint8Array> {
  let size = 0
  for await (const piece of pieces) {
    size += piece.length
    if (size > uploadLimitBytes) throw new DomainError('too-large', `At most ${uploadLimitBytes.toLocaleString('en-GB')} bytes are read here: send less, or in parts.`)
    yield piece
  }
}
