import { createServer } from 'node:net'

/**
 * Tries to listen, and lets go at once.
 *
 * @param {number} port 0: any free one
 * @param {string} host
 * @returns {Promise<{ port: number } | { code: string }>} the port that was had, or the system's error code
 */
export function tryPort(port, host) {
  return new Promise((resolve) => {
    const server = createServer()
    server.once('error', (/** @type {NodeJS.ErrnoException} */ error) => resolve({ code: error.code ?? 'EUNKNOWN' }))
    server.listen({ port, host, exclusive: true }, () => {
      const address = server.address()
      const had = typeof address === 'object' && address ? address.port : port
      server.close(() => resolve({ port: had }))
    })
  })
}

/**
 * A free port of the loopback interface.
 *
 * @param {number} [preferred] taken if it is free
 * @returns {Promise<number>}
 */
export async function freeLoopbackPort(preferred) {
  for (const candidate of preferred ? [preferred, 0] : [0]) {
    const outcome = await tryPort(candidate, '127.0.0.1')
    if ('port' in outcome) return outcome.port
  }
  throw new Error('No free port on 127.0.0.1')
}

/**
 * Says in a sentence why a port cannot be listened on, and how to go on.
 *
 * @param {string} code the system's error code
 * @param {number} port
 * @param {string} host
 * @returns {string}
 */
export function portMessage(code, port, host) {
  const other = port === 3000 ? 3100 : 3000
  const choose = `Choose another port, for example: PORT=${other} npm start`
  if (code === 'EADDRINUSE') return `Port ${port} on ${host} is in use by another program. Stop that program, or choose another port, for example: PORT=${other} npm start`
  if (code === 'EACCES') return `This user may not listen on port ${port}: ports below 1024 are kept for the administrator. ${choose}`
  if (code === 'EADDRNOTAVAIL' || code === 'ENOTFOUND') return `HOST=${host} is not an address of this machine. Leave HOST out to listen on 127.0.0.1.`
  return `Port ${port} on ${host} cannot be listened on (${code}). ${choose}`
}
