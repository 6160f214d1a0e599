import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { callOutward } from '~~/server/outward/call-outward'
import type { OutwardPolicy, ResolvedAddress } from '~~/server/outward/outward-address'
import type { HttpReceiver } from '../../support/http-receiver'
import { startHttpReceiver } from '../../support/http-receiver'

// What a caller of strangers' addresses must not do: OWASP cheat sheet on server-side request forgery.
let receiver: HttpReceiver
const onLoopback: OutwardPolicy = { plain: true, internal: true }
beforeAll(async () => {
  receiver = await startHttpReceiver()
})
afterAll(() => receiver.close())
beforeEach(() => {
  receiver.received.length = 0
  receiver.behave(response => void response.writeHead(204).end())
})
const call = (url: string, more: Partial<Parameters<typeof callOutward>[1]> = {}) => callOutward({ url, method: 'POST', body: '{}' }, { policy: onLoopback, timeoutMs: 1000, ...more })

describe('a call outward', () => {
  it('goes to the address that its name resolved to, with the name in its Host header, asking once', async () => {
    let asked = 0
    const resolve = async () => {
      asked++
      return [{ address: '127.0.0.1', family: 4 }]
    }
    expect(await call(`http://told.example:${receiver.port}/x?y=1`, { resolve })).toEqual({ status: 204, text: '' })
    expect(receiver.received).toMatchObject([{ method: 'POST', path: '/x?y=1', body: '{}', headers: { host: `told.example:${receiver.port}` } }])
    expect(asked).toBe(1)
  })

  it('does not follow a name that points elsewhere the second time it is asked: it is connected to what was looked at', async () => {
    // Nobody listens at the first address.
    const answers: ResolvedAddress[][] = [[{ address: '127.0.0.2', family: 4 }], [{ address: '127.0.0.1', family: 4 }]]
    const resolve = async () => answers.shift()!
    await expect(call(`http://rebinding.example:${receiver.port}/`, { resolve })).rejects.toThrow('127.0.0.2')
    expect(answers).toHaveLength(1)
    expect(receiver.received).toEqual([])
  })

  it('never leaves for an address inside', async () => {
    for (const url of [receiver.url, `http://localhost:${receiver.port}`, `http://[::ffff:127.0.0.1]:${receiver.port}`]) await expect(call(url, { policy: { plain: true, internal: false } })).rejects.toThrow(/not a public/)
    await expect(call(`http://inside.example:${receiver.port}`, { policy: { plain: true, internal: false }, resolve: async () => [{ address: '127.0.0.1', family: 4 }] })).rejects.toThrow(/not a public/)
    expect(receiver.received).toEqual([])
  })

  it('does not follow a redirect', async () => {
    receiver.behave(response => void response.writeHead(302, { location: `${receiver.url}/elsewhere` }).end('gone there'))
    expect(await call(receiver.url)).toEqual({ status: 302, text: 'gone there' })
    expect(receiver.received).toHaveLength(1)
  })

  it.each([
    ['says nothing', () => {}],
    ['begins and does not end', (response: import('node:http').ServerResponse) => void response.writeHead(200).write('x')],
  ])('is given up where its receiver %s', async (_, behaviour) => {
    receiver.behave(behaviour)
    const began = performance.now()
    await expect(call(receiver.url, { timeoutMs: 400 })).rejects.toThrow('There was no answer within 0.4 s.')
    expect(performance.now() - began).toBeLessThan(2000)
  })

  it('is given up where its name is not resolved in time', async () => {
    await expect(call('http://slow.example', { timeoutMs: 300, resolve: () => new Promise(() => {}) })).rejects.toThrow('There was no answer within 0.3 s.')
  })

  it('reads 16 KB of an answer without end and leaves the rest', async () => {
    let ended = false
    receiver.behave((response) => {
      response.writeHead(200)
      const more = setInterval(() => response.write('x'.repeat(8192)), 1)
      response.on('close', () => {
        ended = true
        clearInterval(more)
      })
    })
    const { status, text } = await call(receiver.url, { timeoutMs: 5000 })
    expect([status, text.length]).toEqual([200, 16 * 1024])
    await expect.poll(() => ended).toBe(true)
  })
})
