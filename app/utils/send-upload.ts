import type { UploadOut } from '#shared/schemas/elements'
import type { ApiProblem } from './api'
import { asProblem } from './api'

export interface SendOptions { signal: AbortSignal, onSent: (share: number) => void }

/** Sends a file as it lies, and tells how much of it has gone out, which the platform's fetch does not. */
export function sendUpload(body: FormData, { signal, onSent }: SendOptions): Promise<UploadOut> {
  return new Promise((resolve, reject: (problem: ApiProblem) => void) => {
    const request = new XMLHttpRequest()
    request.responseType = 'json'
    request.upload.addEventListener('progress', ({ loaded, total }) => onSent(total > 0 ? loaded / total : 0))
    request.addEventListener('load', () => {
      if (request.status >= 200 && request.status < 300) return resolve(request.response as UploadOut)
      reject(asProblem({ status: request.status, data: request.response as { detail?: string } | null ?? undefined }))
    })
    for (const name of ['error', 'timeout', 'abort'] as const) request.addEventListener(name, () => reject(asProblem({})))
    signal.addEventListener('abort', () => request.abort())
    request.open('POST', '/api/element-sets/uploads')
    request.send(body)
  })
}
