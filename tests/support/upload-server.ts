import type { Headers } from '../api/actors'
import { addKey } from '../api/actors'
import type { Database } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import type { UploadOut } from '../../shared/schemas/elements'
import type { TestDatabase } from './database'
import { createTestDatabase } from './database'
import type { TestServer } from './server'
import { startServer } from './server'

export interface UploadServer {
  server: TestServer
  database: Database
  made: TestDatabase
  key: Headers
  post: (body: Buffer | string, headers?: Record<string, string>) => Promise<Response>
  get: <T = UploadOut>(path: string) => Promise<T>
  close: () => Promise<void>
}

/** A built server with a database of its own, and a key that may upload to it. */
export async function startUploadServer(): Promise<UploadServer> {
  const made = await createTestDatabase()
  const database = openDatabase(made.url, { max: 2 })
  const server = await startServer({ databaseUrl: made.url })
  const [writes, reads] = [await addKey(database.db, 'elements:write'), await addKey(database.db, 'read')]
  return {
    server, database, made, key: writes,
    post: (body, headers = {}) => fetch(`${server.url}/api/element-sets/uploads`, { method: 'POST', headers: { 'content-type': 'text/plain', ...writes, ...headers }, body: body as Uint8Array<ArrayBuffer> }),
    get: async path => (await fetch(`${server.url}${path}`, { headers: reads })).json(),
    close: async () => {
      await server.stop()
      await database.close()
      await made.drop()
    },
  }
}
