import { createServer } from 'node:net'
import { describe, expect, it } from 'vitest'
import { freeLoopbackPort, portMessage, tryPort } from '../../../server/cli/lib/ports.mjs'

describe('a port', () => {
  it('that another program listens on is told by its number, with the way to choose another', async () => {
    const server = createServer()
    await new Promise<void>(resolve => server.listen(0, '127.0.0.1', resolve))
    const { port } = server.address() as { port: number }
    try {
      const outcome = await tryPort(port, '127.0.0.1')
      expect(outcome).toEqual({ code: 'EADDRINUSE' })
      expect(portMessage('EADDRINUSE', port, '127.0.0.1')).toMatch(new RegExp(`Port ${port} .*in use.*PORT=3000 npm start`))
      expect(await freeLoopbackPort(port)).not.toBe(port)
    }
    finally {
      await new Promise(resolve => server.close(resolve))
    }
  })

  it('that is free is let go again', async () => {
    const port = await freeLoopbackPort()
    expect(await tryPort(port, '127.0.0.1')).toEqual({ port })
    expect(await freeLoopbackPort(port)).toBe(port)
  })

  it('never gets itself suggested', () => {
    expect(portMessage('EADDRINUSE', 3000, '127.0.0.1')).toContain('PORT=3100')
  })

  it('on an address of another machine is told as such', async () => {
    const outcome = await tryPort(3000, '192.0.2.1')
    expect(outcome).toEqual({ code: 'EADDRNOTAVAIL' })
    expect(portMessage('EADDRNOTAVAIL', 3000, '192.0.2.1')).toContain('HOST=192.0.2.1 is not an address of this machine')
  })
})
