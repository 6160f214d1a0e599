import { randomBytes } from 'node:crypto'
import pg from 'pg'
import { inject } from 'vitest'

export interface TestDatabase {
  /** Its address, as the role that owns it. */
  url: string
  /** Disconnects everyone from it and removes it. */
  drop: () => Promise<void>
}

/**
 * A database of the test's own with all migrations applied, copied from the template in milliseconds; `empty`: without any.
 * Only in the projects whose global set-up is database-setup.ts.
 */
export async function createTestDatabase({ empty = false } = {}): Promise<TestDatabase> {
  const name = `test_${randomBytes(8).toString('hex')}`
  const url = new URL(inject('databaseOwnerUrl'))
  await asAdmin(`create database ${name} template ${empty ? 'template0' : inject('databaseTemplate')} owner ${decodeURIComponent(url.username)}`)
  url.pathname = `/${name}`
  return { url: url.href, drop: () => asAdmin(`drop database if exists ${name} with (force)`) }
}

async function asAdmin(statement: string): Promise<void> {
  const client = new pg.Client({ connectionString: inject('databaseAdminUrl') })
  await client.connect()
  try {
    await client.query(statement)
  }
  finally {
    await client.end()
  }
}
