import pg from 'pg'
import { inject, it, expect } from 'vitest'
import { createTestDatabase } from '../../support/database'

async function ask<T extends pg.QueryResultRow>(url: string, query: string): Promise<T[]> {
  const client = new pg.Client({ connectionString: url })
  await client.connect()
  try {
    return (await client.query<T>(query)).rows
  }
  finally {
    await client.end()
  }
}

it('gives each test a database of its own, owned by a role that is no superuser', async () => {
  const [one, two] = await Promise.all([createTestDatabase(), createTestDatabase()])
  try {
    await ask(one.url, 'create table only_here (id int)')
    expect(await ask(two.url, 'select to_regclass(\'only_here\') as found')).toEqual([{ found: null }])
    expect(await ask(one.url, 'select rolsuper from pg_roles where rolname = current_user')).toEqual([{ rolsuper: false }])
  }
  finally {
    await Promise.all([one.drop(), two.drop()])
  }
})

it('removes a database although someone is still connected', async () => {
  const database = await createTestDatabase()
  const lingering = new pg.Client({ connectionString: database.url })
  lingering.on('error', () => {})
  await lingering.connect()
  await database.drop()
  const name = new URL(database.url).pathname.slice(1)
  expect(await ask(inject('databaseAdminUrl'), `select 1 from pg_database where datname = '${name}'`)).toEqual([])
})
