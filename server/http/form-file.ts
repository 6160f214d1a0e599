import { DomainError } from '~~/server/domain/errors'

export interface FormFile { readonly fileName: string | null, readonly pieces: AsyncGenerator<Uint8Array> }

const headLimitBytes = 16 * 1024
const notAForm = () => new DomainError('unreadable', 'The body is not a readable multipart form: check its boundary, and that it was sent whole.')
const missing = (message: string) => new DomainError('not-valid', `file: ${message}`, [{ path: 'file', message }])

/**
 * The field `file` of a multipart form (RFC 7578), handed out piece by piece while the form comes in: the platform's own
 * reader of forms would hold the whole. What stands before it is passed over, what follows it is looked through.
 * @throws unreadable, not-valid; the latter also from `pieces`, where a second file follows
 */
export async function openFormFile(contentType: string, body: AsyncGenerator<Uint8Array>): Promise<FormFile> {
  const form = new FormReader(boundaryOf(contentType), body)
  for (let part = await form.nextPart(); part; part = await form.nextPart()) {
    if (part.name === 'file') return { fileName: part.fileName, pieces: onlyFile(form) }
    for await (const _ of form.content()) { /* another field */ }
  }
  throw missing('Choose a file: the form has no field of this name.')
}

async function* onlyFile(form: FormReader): AsyncGenerator<Uint8Array> {
  yield* form.content()
  for (let part = await form.nextPart(); part; part = await form.nextPart()) {
    if (part.name === 'file') throw missing('Send one file at a time.')
    for await (const _ of form.content()) { /* another field */ }
  }
}

function boundaryOf(contentType: string): string {
  const [, quoted, bare] = /;\s*boundary=(?:"([^"]{1,70})"|([^\s;"]{1,70}))/i.exec(contentType) ?? []
  const boundary = quoted ?? bare
  if (boundary === undefined) throw notAForm()
  return boundary
}

/** Name and file name as browsers write them (WHATWG HTML, multipart/form-data): quotes and line ends percent-encoded. */
function namesOf(head: string): { name: string | null, fileName: string | null } {
  const disposition = /^content-disposition:[ \t]*form-data[ \t]*;(.*)$/im.exec(head)?.[1] ?? ''
  const value = (key: string) => {
    const [, quoted, bare] = new RegExp(`(?:^|;)[ \\t]*${key}=(?:"((?:[^"\\\\]|\\\\.)*)"|([^\\s;"]+))`, 'i').exec(disposition) ?? []
    const found = quoted?.replace(/\\(["\\])/g, '$1') ?? bare
    return found === undefined ? null : found.replace(/%22/g, '"').replace(/%0D|%0A/gi, ' ')
  }
  return { name: value('name'), fileName: value('filename') }
}

/** Walks a multipart body (RFC 2046, 5.1.1): a delimiter is a line end, two hyphens and the boundary. */
class FormReader {
  private held: Buffer = Buffer.from('\r\n')
  private ended = false
  private started = false
  private readonly delimiter: Buffer

  constructor(boundary: string, private readonly body: AsyncGenerator<Uint8Array>) {
    this.delimiter = Buffer.from(`\r\n--${boundary}`, 'latin1')
  }

  /** Moves to the next part and reads its head; null at the form's end. The part before must have been read whole. */
  async nextPart(): Promise<{ name: string | null, fileName: string | null } | null> {
    if (!this.started) {
      this.started = true
      for await (const _ of this.content()) { /* the preamble */ }
    }
    await this.need(2)
    if (this.held.subarray(0, 2).toString('latin1') === '--') {
      // An epilogue is nobody's: what is left goes.
      while (await this.more()) this.held = Buffer.alloc(0)
      return null
    }
    for (;;) {
      const end = this.held.indexOf('\r\n\r\n')
      if (end >= 0) {
        const head = this.held.subarray(0, end).toString('utf8')
        this.held = this.held.subarray(end + 4)
        return namesOf(head.replace(/\r\n/g, '\n'))
      }
      if (this.held.length > headLimitBytes || !await this.more()) throw notAForm()
    }
  }

  /** What stands before the next delimiter, which is passed over. */
  async* content(): AsyncGenerator<Uint8Array> {
    for (;;) {
      const at = this.held.indexOf(this.delimiter)
      if (at >= 0) {
        const piece = this.held.subarray(0, at)
        this.held = this.held.subarray(at + this.delimiter.length)
        if (piece.length > 0) yield piece
        return
      }
      const safe = this.held.length - this.delimiter.length + 1
      if (safe > 0) {
        const piece = this.held.subarray(0, safe)
        this.held = this.held.subarray(safe)
        yield piece
      }
      if (!await this.more()) throw notAForm()
    }
  }

  private async need(length: number): Promise<void> {
    while (this.held.length < length) if (!await this.more()) throw notAForm()
  }

  private async more(): Promise<boolean> {
    if (this.ended) return false
    const { value, done } = await this.body.next()
    if (done) this.ended = true
    else this.held = this.held.length === 0 ? Buffer.from(value.buffer, value.byteOffset, value.length) : Buffer.concat([this.held, value])
    return !done
  }
}
