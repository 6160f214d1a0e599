import { sql } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import type { Database } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import { mails, settings } from '../../server/database/schema'
import { hashPassword } from '../../server/domain/auth/passwords'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import { readExposition } from '../support/exposition'
import { addPerson } from '../support/fixtures'
import type { HttpReceiver } from '../support/http-receiver'
import { startHttpReceiver } from '../support/http-receiver'
import type { TestServer } from '../support/server'
import { startServer } from '../support/server'
import type { Headers } from './actors'
import { addKey, password, signIn } from './actors'

let made: TestDatabase
let database: Database
let receiver: HttpReceiver
let one: TestServer
let other: TestServer
let email: string
beforeAll(async () => {
  made = await createTestDatabase()
  database = openDatabase(made.url, { max: 2 })
  receiver = await startHttpReceiver()
  email = (await addPerson(database.db, ['administrator', 'on-call'], { passwordHash: await hashPassword(password) })).email
  await database.db.insert(settings).values({ key: 'heartbeatUrl', value: `${receiver.url}/alive` })
  const options = { databaseUrl: made.url, env: { TRUST_PROXY: '1', ALLOW_INTERNAL_WEB_HOOKS: '1', ALLOW_INTERNAL_HEARTBEAT: '1' } }
  ;[one, other] = await Promise.all([startServer(options), startServer(options)])
})
afterAll(async () => {
  other?.kill()
  await one?.stop()
  await receiver?.close()
  await database?.close()
  await made?.drop()
})

const call = async (server: TestServer, method: string, path: string, headers: Headers, body?: object) => {
  const response = await fetch(`${server.url}${path}`, { method, headers: { ...headers, ...(body ? { 'content-type': 'application/json' } : {}) }, ...(body ? { body: JSON.stringify(body) } : {}) })
  const text = await response.text()
  return { status: response.status, type: response.headers.get('content-type'), text, json: <T>() => JSON.parse(text) as T }
}

describe('two servers on one database', () => {
  it('know each other’s sessions, and end them for each other', async () => {
    const session = await signIn(one.url, email)
    expect((await call(other, 'GET', '/api/auth/me', session)).status).toBe(200)
    expect((await call(other, 'POST', '/api/auth/sign-out', session)).status).toBe(204)
    expect((await call(one, 'GET', '/api/auth/me', session)).status).toBe(401)
  })

  it('count failed sign-ins together', async () => {
    const statuses: number[] = []
    for (let tries = 0; tries < 10; tries++) statuses.push((await call(tries % 2 ? one : other, 'POST', '/api/auth/sign-in', { 'x-forwarded-for': '192.0.2.99' }, { email, password: `wrong ${tries} and more` })).status)
    expect(statuses).toEqual([...Array.from({ length: 8 }, () => 401), 429, 429])
  })

  it('deliver for each other, signed; and say on either what was delivered', async () => {
    const session = await signIn(one.url, email)
    const hook = (await call(one, 'POST', '/api/web-hooks', session, { name: 'Desk', url: receiver.url, events: ['alert.opened', 'alert.closed'] })).json<{ id: string, secret: string }>()
    expect(hook.secret).toMatch(/^whsec_/)
    expect((await call(other, 'POST', `/api/web-hooks/${hook.id}/test`, session)).status).toBe(200)
    await expect.poll(() => receiver.received.filter(({ method }) => method === 'POST').length, { timeout: 10_000 }).toBe(1)
    await expect.poll(async () => (await call(other, 'GET', `/api/web-hooks/${hook.id}/deliveries`, session)).json<{ items: object[] }>().items, { timeout: 5000 }).toMatchObject([{ event: 'hook.test', state: 'delivered', attempts: 1 }])
  })

  it('are measured as one: by a key of scope metrics, in the text format, with what stands in the database', async () => {
    const key = await addKey(database.db, 'metrics')
    await database.db.insert(mails).values({ kind: 'digest', toName: 'A', toAddress: 'a@ops.example', subject: 'x', text: 'x', html: 'x', messageId: '<x>', state: 'failed' })
    const { status, type, text } = await call(one, 'GET', '/metrics', key)
    expect([status, type]).toEqual([200, 'text/plain; version=0.0.4; charset=utf-8'])
    const families = readExposition(text)
    const value = (name: string, labels: Record<string, string> = {}) => families.get(name)?.samples.find(sample => Object.entries(labels).every(([label, wanted]) => sample.labels[label] === wanted))?.value
    expect(value('nullbeat_servers', { role: 'server', state: 'alive' })).toBe(2)
    expect(value('nullbeat_mails', { state: 'failed' })).toBe(1)
    expect(value('nullbeat_http_requests_total', { method: 'POST', route: '/api/auth/sign-in', status: '401' })).toBe(4)
    expect(value('nullbeat_http_request_duration_seconds', { route: '/api/auth/sign-in' })).toBeTypeOf('number')
    for (const name of ['nullbeat_jobs', 'nullbeat_predictions_waiting', 'nullbeat_slots_due', 'nullbeat_slots_late', 'nullbeat_alerts', 'nullbeat_web_hook_deliveries', 'nullbeat_table_revisions', 'nullbeat_uploads', 'process_cpu_seconds_total', 'process_resident_memory_bytes', 'process_start_time_seconds']) expect(value(name), name).toBeGreaterThanOrEqual(0)
    expect(text).not.toContain(email)
  })

  it('call outward while all is well', async () => {
    await expect.poll(() => receiver.received.filter(({ path }) => path === '/alive').length, { timeout: 30_000, interval: 500 }).toBeGreaterThan(1)
    const session = await signIn(one.url, email)
    expect((await call(other, 'GET', '/api/servers', session)).json()).toMatchObject({ heartbeat: { url: `${receiver.url}/alive`, last: { ok: true, detail: 'Answered 204.' } } })
  })

  it('notice when one of them stands still: it is called silent, and no longer once it goes on', { timeout: 120_000 }, async () => {
    const session = await signIn(one.url, email)
    const states = async () => (await call(one, 'GET', '/api/servers', session)).json<{ items: { pid: number, state: string }[] }>().items.map(({ pid, state }) => [pid, state])
    expect(await states()).toEqual(expect.arrayContaining([[one.pid, 'alive'], [other.pid, 'alive']]))
    const alarms = async () => (await call(one, 'GET', '/api/alerts?state=standing', session)).json<{ items: { kind: string, title: string }[] }>().items.filter(({ kind }) => kind === 'server-silent').map(({ title }) => title)
    process.kill(other.pid, 'SIGSTOP')
    // The minute that it has not been seen for, without waiting for it.
    await database.db.execute(sql`UPDATE servers SET seen_at = seen_at - interval '61 seconds' WHERE pid = ${other.pid}`)
    await expect.poll(alarms, { timeout: 60_000, interval: 500 }).toEqual([expect.stringContaining(`Server ${other.pid} on`)])
    process.kill(other.pid, 'SIGCONT')
    await expect.poll(alarms, { timeout: 40_000, interval: 500 }).toEqual([])
  })
})
