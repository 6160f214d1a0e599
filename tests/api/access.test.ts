import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { routes } from '../../shared/routes'
import type { Database } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import { addPass, addSpacecraft, addStation, addTable } from '../support/fixtures'
import type { TestServer } from '../support/server'
import { startServer } from '../support/server'
import type { Actor, Headers } from './actors'
import { makeActors } from './actors'
import type { Expected } from './expected-access'
import { expectedAccess } from './expected-access'

let server: TestServer
let made: TestDatabase
let database: Database
let actors: Actor[]
let tableId: string

beforeAll(async () => {
  made = await createTestDatabase()
  database = openDatabase(made.url, { max: 2 })
  server = await startServer({ databaseUrl: made.url })
  const stations = [await addStation(database.db), await addStation(database.db)]
  actors = await makeActors(server.url, database.db, stations)
  const aos = new Date(Date.now() + 3600_000)
  const craft = await addSpacecraft(database.db, new Date())
  const pass = await addPass(database.db, craft, stations[0]!, aos)
  tableId = (await addTable(database.db, craft, stations[0]!, pass, { state: 'published' })).id
})
afterAll(async () => {
  await server?.stop()
  await database?.close()
  await made?.drop()
})

async function request(name: string, headers: Headers, body = '{}'): Promise<number> {
  const [method, path] = name.split(' ') as [string, string]
  const sends = method !== 'GET' && method !== 'DELETE'
  const response = await fetch(`${server.url}${path.replace(/\{\w+\}/g, () => randomUUID())}`, { method, headers: { ...headers, ...(sends ? { 'content-type': 'application/json' } : {}) }, ...(sends ? { body } : {}) })
  await response.arrayBuffer()
  return response.status
}

/** Nobody is told to sign in, somebody that it is not theirs to do; a wrong key is told so wherever keys are looked at. */
function expectationFor(name: string, expected: Expected, { is, headers }: Actor): string {
  if (expected === 'anybody') return headers.authorization && is === 'nobody' && name.startsWith('POST ') ? '401' : 'allowed'
  if (is === 'nobody') return '401'
  return ('role' in is ? expected.roles.includes(is.role) : expected.keys.includes(is.scope)) ? 'allowed' : '403'
}

describe('every route, for everyone', () => {
  it('has its line in the list of who may what: a route that is not in it is not to be there', () => {
    expect(Object.keys(routes).sort()).toEqual(Object.keys(expectedAccess).sort())
  })

  // Signing out ends the session that the other lines need.
  const lines = Object.entries(expectedAccess).sort(([a], [b]) => Number(a.endsWith('/sign-out')) - Number(b.endsWith('/sign-out')))
  it.each(lines)('%s', async (name, expected) => {
    const answers = await Promise.all(actors.map(async actor => [actor.name, await request(name, actor.headers)] as const))
    const seen = Object.fromEntries(answers.map(([actor, status]) => [actor, status === 401 || status === 403 ? String(status) : status >= 500 ? `failed with ${status}` : 'allowed']))
    expect(seen).toEqual(Object.fromEntries(actors.map(actor => [actor.name, expectationFor(name, expected, actor)])))
  })
})

describe('a station’s table', () => {
  const headersOf = (name: string) => actors.find(actor => actor.name === name)!.headers
  const fetchTable = (name: string) => fetch(`${server.url}/api/station/v1/tables/${tableId}`, { headers: { ...headersOf(name), accept: 'application/json' } })
  const report = (name: string) => fetch(`${server.url}/api/station/v1/tables/${tableId}/report`, { method: 'POST', headers: { ...headersOf(name), 'content-type': 'application/json' }, body: JSON.stringify({ revision: 1, outcome: 'loaded' }) })
  const listed = async (name: string) => ((await (await fetch(`${server.url}/api/station/v1/tables`, { headers: headersOf(name) })).json()) as { items: { id: string }[] }).items.map(item => item.id)

  it('does not exist for another station’s key, and does for its own', async () => {
    expect([(await fetchTable('another station’s key')).status, (await report('another station’s key')).status]).toEqual([404, 404])
    expect(await listed('another station’s key')).toEqual([])
    expect(await listed('station key')).toEqual([tableId])
    expect([(await fetchTable('station key')).status, (await report('station key')).status]).toEqual([200, 204])
  })
})

describe('what is not in the route table', () => {
  it.each(['GET /api/nothing', 'PUT /api/spacecraft', 'POST /api/tables/{id}', 'GET /api', 'DELETE /api/audit', 'PATCH /api/audit/{id}', 'GET /api/station/v2/tables'])('answers 404 to an administrator: %s', async (name) => {
    expect(await request(name, actors.find(actor => actor.name === 'administrator')!.headers)).toBe(404)
  })
})

describe('a request that changes something', () => {
  const cookie = async () => (await makeActors(server.url, database.db, [await addStation(database.db), await addStation(database.db)])).find(actor => actor.name === 'administrator')!.headers
  it('is refused from another site’s page, whatever the session, and taken from the product’s own', async () => {
    const session = await cookie()
    const change = (headers: Headers) => request('PATCH /api/settings', { ...session, ...headers })
    expect(await change({ origin: 'https://elsewhere.example' })).toBe(403)
    expect(await change({ 'origin': server.url, 'sec-fetch-site': 'cross-site' })).toBe(403)
    expect(await change({ 'origin': server.url, 'sec-fetch-site': 'same-origin' })).toBe(200)
  })
})
