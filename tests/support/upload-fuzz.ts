import { readFileSync } from 'node:fs'
import { dice, mutate } from '../unit/formats/elements/mutate'
import { startUploadServer } from './upload-server'

export interface FuzzRun { sent: number, faults: string[], statuses: Record<string, number>, slowestMs: number }

const reference = (path: string) => readFileSync(new URL(`../../data/reference/uploads/${path}`, import.meta.url))
const bodyTypes = ['text/plain', 'application/json', 'application/xml', 'text/csv', 'text/plain; charset=utf-16', 'multipart/form-data', 'multipart/form-data; boundary=', 'application/octet-stream', '']
const atOnce = 4

function formOf(bytes: Uint8Array, boundary: string): Uint8Array {
  return Buffer.concat([Buffer.from(`--${boundary}\r\nContent-Disposition: form-data; name="note"\r\n\r\nx\r\n--${boundary}\r\nContent-Disposition: form-data; name="file"; filename="a.tle"\r\nContent-Type: text/plain\r\n\r\n`), bytes, Buffer.from(`\r\n--${boundary}--\r\n`)])
}

/** Sends that many malformed uploads: mutated files by every type of body, and mutated forms. */
export async function fuzzUploads(count: number, seed: number): Promise<FuzzRun> {
  const { files } = JSON.parse(reference('manifest.json').toString()) as { files: { file: string, bytes: number }[] }
  const originals = files.filter(({ bytes }) => bytes < 20_000).map(({ file }) => reference(file))
  const roll = dice(seed)
  const { post, close } = await startUploadServer()
  const run: FuzzRun = { sent: 0, faults: [], statuses: {}, slowestMs: 0 }

  async function send() {
    const original = originals[roll(originals.length)]!
    const asForm = roll(3) === 0
    const boundary = `b${roll(1e6)}`
    // Of a form the frame is mutated, of a body the content.
    const body = asForm ? mutate(formOf(original, boundary), roll) : mutate(original, roll)
    const type = asForm ? `multipart/form-data; boundary=${boundary}` : bodyTypes[roll(bodyTypes.length)]!
    const asked = performance.now()
    const response = await post(Buffer.from(body), { 'content-type': type })
    const text = await response.text()
    const tookMs = performance.now() - asked
    run.sent++
    run.statuses[response.status] = (run.statuses[response.status] ?? 0) + 1
    run.slowestMs = Math.max(run.slowestMs, Math.round(tookMs))
    const fault = faultOf(response, text, tookMs)
    if (fault) run.faults.push(`${type}: ${fault}; ${JSON.stringify(Buffer.from(body).toString('latin1').slice(0, 200))}`)
  }
  try {
    while (run.sent < count) await Promise.all(Array.from({ length: atOnce }, send))
    return run
  }
  finally {
    await close()
  }
}

function faultOf({ status, headers }: Response, text: string, tookMs: number): string | null {
  if (tookMs > 1000) return `took ${Math.round(tookMs)} ms`
  if (status === 201) return null
  if (![400, 413, 415, 422].includes(status)) return `${status} ${text.slice(0, 200)}`
  if (!(headers.get('content-type') ?? '').startsWith('application/problem+json')) return `${status} as ${headers.get('content-type')}`
  const { detail, errors = [] } = JSON.parse(text) as { detail: string, errors?: { line?: number, message: string }[] }
  if (detail.length < 20) return `says only ${detail}`
  // A form without its file has no lines; everything that was read has.
  const isOfForm = /Choose a file|one file at a time/.test(detail)
  if (status === 422 && !isOfForm && !(errors.length > 0 && errors.every(error => Number.isInteger(error.line) && error.line! >= 1 && error.message.length > 10))) return `422 without lines: ${text.slice(0, 200)}`
  return null
}
