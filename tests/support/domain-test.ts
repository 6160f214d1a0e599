import { afterAll, beforeAll } from 'vitest'
import type { Database, Db } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import { createTestDatabase } from './database'

/** A migrated database of the file's own, opened before its tests and removed after them. */
export function useTestDatabase(): { readonly db: Db } {
  let database: Database
  let drop: () => Promise<void>
  beforeAll(async () => {
    const made = await createTestDatabase()
    drop = made.drop
    database = openDatabase(made.url)
  })
  afterAll(async () => {
    await database.close()
    await drop()
  })
  return { get db() { return database.db } }
}

/** The refusal that a promise ends with: its code and the fields it names. */
export async function refusalOf(promise: Promise<unknown>): Promise<{ code: unknown, paths: string[], message: string }> {
  try {
    await promise
  }
  catch (error) {
    const { code, fields = [], message } = error as { code?: unknown, fields?: { path: string }[], message: string }
    return { code, paths: fields.map(field => field.path), message }
  }
  throw new Error('It was not refused.')
}
