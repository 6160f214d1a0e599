import type { IncomingMessage } from 'node:http'
import { request as requestPlain } from 'node:http'
import { request as requestSecure } from 'node:https'
import type { OutwardPolicy, Resolve } from './outward-address'
import { resolveOutward } from './outward-address'

export interface OutwardCall {
  url: string
  method: 'GET' | 'POST'
  headers?: Record<string, string>
  body?: string
}
export interface OutwardOptions { policy: OutwardPolicy, resolve?: Resolve, timeoutMs?: number }
export interface OutwardAnswer { status: number, /** Its beginning. */ text: string }

/** All of a call: name, connection, answer. */
const timeLimitMs = 10_000
/** More of an answer is not read. */
const answerLimitBytes = 16 * 1024

/**
 * Calls an address that somebody entered: public ones only (or as the policy opens), resolved once, without redirects,
 * within ten seconds, reading 16 KB of the answer at most.
 * @throws AddressRefused, or the network's error
 */
export async function callOutward({ url: text, method, headers = {}, body }: OutwardCall, { policy, resolve, timeoutMs = timeLimitMs }: OutwardOptions): Promise<OutwardAnswer> {
  const signal = AbortSignal.timeout(timeoutMs)
  const late = new Promise<never>((_, reject) => signal.addEventListener('abort', () => reject(new Error(`There was no answer within ${timeoutMs / 1000} s.`)), { once: true }))
  return Promise.race([late, (async () => {
    const { url, target } = await resolveOutward(text, policy, resolve)
    return new Promise<OutwardAnswer>((settle, reject) => {
      const request = (url.protocol === 'https:' ? requestSecure : requestPlain)(url, {
        method,
        signal,
        // A connection of its own: a kept one might lead to where the name pointed before.
        agent: false,
        headers: { 'user-agent': 'nullbeat', 'accept': '*/*', ...headers, ...(body === undefined ? {} : { 'content-length': Buffer.byteLength(body) }) },
        lookup: (_hostname, options, done) => options.all ? done(null, [target]) : done(null, target.address, target.family),
      }, response => void readBeginning(response).then(answer => settle({ status: response.statusCode ?? 0, text: answer }), reject))
      request.on('error', reject)
      request.end(body)
    })
  })()])
}

async function readBeginning(response: IncomingMessage): Promise<string> {
  const chunks: Buffer[] = []
  let length = 0
  for await (const chunk of response as AsyncIterable<Buffer>) {
    chunks.push(chunk)
    length += chunk.length
    // Leaving the loop ends the connection.
    if (length >= answerLimitBytes) break
  }
  return new TextDecoder().decode(Buffer.concat(chunks).subarray(0, answerLimitBytes))
}
