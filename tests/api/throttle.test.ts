import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Database } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import { hashPassword } from '../../server/domain/auth/passwords'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import { addPerson } from '../support/fixtures'
import type { TestServer } from '../support/server'
import { startServer } from '../support/server'
import { password } from './actors'

let server: TestServer
let made: TestDatabase
let database: Database
let email: string
beforeAll(async () => {
  made = await createTestDatabase()
  database = openDatabase(made.url, { max: 2 })
  email = (await addPerson(database.db, ['operator'], { passwordHash: await hashPassword(password) })).email
  server = await startServer({ databaseUrl: made.url, env: { TRUST_PROXY: '1' } })
})
afterAll(async () => {
  await server?.stop()
  await database?.close()
  await made?.drop()
})

const post = (path: string, from: string, body: object) => fetch(`${server.url}${path}`, { method: 'POST', headers: { 'content-type': 'application/json', 'x-forwarded-for': from }, body: JSON.stringify(body) })

describe('somebody who tries out passwords', () => {
  it('is throttled within ten tries and told how long to wait, while the owner gets in from elsewhere', async () => {
    const statuses: number[] = []
    for (let tries = 0; tries < 10; tries++) statuses.push((await post('/api/auth/sign-in', '192.0.2.7', { email, password: `wrong ${tries} and more` })).status)
    expect(statuses.slice(0, 8)).toEqual(Array.from({ length: 8 }, () => 401))
    expect(statuses.slice(8)).toEqual([429, 429])
    const right = await post('/api/auth/sign-in', '192.0.2.7', { email, password })
    expect(right.status).toBe(429)
    expect(Number(right.headers.get('retry-after'))).toBeGreaterThan(0)
    expect((await post('/api/auth/sign-in', '198.51.100.9', { email, password })).status).toBe(200)
  })

  it('gets no further with many tries at once', async () => {
    const statuses = await Promise.all(Array.from({ length: 30 }, async (_, tries) => (await post('/api/auth/sign-in', '192.0.2.40', { email, password: `wrong ${tries} and at once` })).status))
    expect(statuses.filter(status => status === 401)).toHaveLength(8)
    expect(statuses.filter(status => status === 429)).toHaveLength(22)
  })

  it('gets one and the same answer for an address that is known and one that is not', async () => {
    const known = await post('/api/auth/sign-in', '192.0.2.20', { email, password: 'wrong and wrong again' })
    const unknown = await post('/api/auth/sign-in', '192.0.2.20', { email: 'nobody@ops.example', password: 'wrong and wrong again' })
    expect([unknown.status, await unknown.text()]).toEqual([known.status, await known.text()])
  })
})

it('throttles whoever tries out one-time addresses', async () => {
  const statuses: number[] = []
  for (let tries = 0; tries < 9; tries++) statuses.push((await post('/api/auth/links/look', '192.0.2.30', { token: `${'x'.repeat(42)}${tries}` })).status)
  expect(statuses).toEqual([...Array.from({ length: 8 }, () => 404), 429])
})
