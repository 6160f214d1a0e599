import { createHmac } from 'node:crypto'
import { asc, eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { alerts, audit, webHookDeliveries, webHooks } from '~~/server/database/schema'
import { reconcileAlerts } from '~~/server/domain/alerts/reconcile-alerts'
import type { PersonActor } from '~~/server/domain/context'
import { scheduleActor } from '~~/server/domain/context'
import { changeWebHook } from '~~/server/domain/web-hooks/change-web-hook'
import { createWebHook } from '~~/server/domain/web-hooks/create-web-hook'
import { deliverWebHook } from '~~/server/domain/web-hooks/deliver-web-hook'
import { listDeliveries } from '~~/server/domain/web-hooks/list-deliveries'
import { listWebHooks } from '~~/server/domain/web-hooks/read-web-hooks'
import { repeatDelivery } from '~~/server/domain/web-hooks/repeat-delivery'
import { retireWebHook } from '~~/server/domain/web-hooks/retire-web-hook'
import { tellHooks } from '~~/server/domain/web-hooks/tell-hooks'
import { testWebHook } from '~~/server/domain/web-hooks/test-web-hook'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { addActor } from '../../support/fixtures'
import type { HttpReceiver } from '../../support/http-receiver'
import { startHttpReceiver } from '../../support/http-receiver'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'

// Standard Webhooks 1.0.0 (standard-webhooks.md: headers, signature scheme, delivery semantics, 410); the rest is common practice of at-least-once delivery.
const test = useTestDatabase()
let receiver: HttpReceiver
let admin: PersonActor
const now = new Date('2026-12-01T18:00:00.250Z')
const later = new Date('2026-12-01T18:01:00.750Z')
const deps = (at = now) => ({ db: test.db, actor: admin, now: at })
const outward = { policy: { plain: true, internal: true }, timeoutMs: 1000 }

beforeAll(async () => {
  receiver = await startHttpReceiver()
  admin = await addActor(test.db, ['administrator'])
})
afterAll(() => receiver.close())
beforeEach(async () => {
  await test.db.delete(webHooks)
  await test.db.delete(alerts)
  await emptyQueue(test.db)
  receiver.received.length = 0
  receiver.behave(response => void response.writeHead(204).end())
  process.env.NULLBEAT_TEST = '1'
  process.env.ALLOW_INTERNAL_WEB_HOOKS = '1'
})

const make = (events: Parameters<typeof createWebHook>[1]['events'] = ['table.published', 'alert.closed'], name = 'Night desk') => createWebHook(deps(), { name, url: `${receiver.url}/told`, events })
const deliveries = () => test.db.select().from(webHookDeliveries).orderBy(asc(webHookDeliveries.createdAt))
async function tell() {
  const before = (await deliveries()).map(({ id }) => id)
  await test.db.transaction(tx => tellHooks({ db: tx, now }, 'table.published', { tableId: 'b0b0', revision: 2 }))
  return (await deliveries()).find(({ id }) => !before.includes(id))!
}
const attempt = (id: string, at = now, lastTry = false) => deliverWebHook({ db: test.db, now: at }, id, { outward, lastTry })

describe('a message to a web hook', () => {
  it('is signed as Standard Webhooks has it, over its id, the time of the try and the body', async () => {
    const { secret } = await make()
    expect(secret).toMatch(/^whsec_[A-Za-z0-9+/]+=*$/)
    const bytes = Buffer.from(secret.slice('whsec_'.length), 'base64')
    expect(bytes.length).toBeGreaterThanOrEqual(24)
    expect(bytes.length).toBeLessThanOrEqual(64)
    const { id } = await tell()
    await attempt(id, later)
    const [message] = receiver.received
    const { 'webhook-id': messageId, 'webhook-timestamp': timestamp, 'webhook-signature': signature } = message!.headers
    expect(messageId).toBe(id)
    expect(timestamp).toBe(String(Date.parse('2026-12-01T18:01:00Z') / 1000))
    expect(signature).toBe(`v1,${createHmac('sha256', bytes).update(`${id}.${timestamp}.${message!.body}`).digest('base64')}`)
    expect(message).toMatchObject({ method: 'POST', path: '/told', headers: { 'content-type': 'application/json' } })
    expect(JSON.parse(message!.body)).toEqual({ type: 'table.published', timestamp: now.toISOString(), data: { tableId: 'b0b0', revision: 2 } })
    expect(await deliveries()).toMatchObject([{ state: 'delivered', attempts: 1, lastStatus: 204, lastError: null, triedAt: later }])
  })

  it('exists exactly when what it tells has happened, for those who asked for it', async () => {
    await make()
    await make(['table.withdrawn'], 'Other')
    const off = await make(['table.published'], 'Off')
    await changeWebHook(deps(), { id: off.id, enabled: false })
    await test.db.transaction(async (tx) => {
      await tellHooks({ db: tx, now }, 'table.published', {})
      throw new Error('undone')
    }).catch(() => {})
    expect(await deliveries()).toEqual([])
    await tell()
    expect(await deliveries()).toHaveLength(1)
    expect(await queuedJobs(test.db, 'web-hook')).toEqual([{ deliveryId: (await deliveries())[0]!.id }])
  })

  it('is tried again after anything but 2xx, keeping the reason and the beginning of the answer, and given up at the last try', async () => {
    await make()
    const { id } = await tell()
    receiver.behave(response => void response.writeHead(500).end(`\u0000broken ${'x'.repeat(3000)}`))
    await expect(attempt(id)).rejects.toThrow('Answered 500')
    const [kept] = await deliveries()
    expect(kept).toMatchObject({ state: 'queued', attempts: 1, lastStatus: 500, lastError: expect.stringMatching(/^Answered 500. broken x+$/) })
    expect(kept!.lastError!.length).toBeLessThanOrEqual(500)
    receiver.behave(response => void response.writeHead(301, { location: 'https://elsewhere.example' }).end())
    await expect(attempt(id)).rejects.toThrow('Redirects are not followed')
    receiver.behave((_, request) => void request.socket.destroy())
    await attempt(id, later, true)
    expect(await deliveries()).toMatchObject([{ state: 'failed', attempts: 3, lastStatus: null, lastError: expect.stringMatching(/hang up|ECONNRESET/) }])
    await attempt(id, later)
    expect(receiver.received).toHaveLength(3)
  })

  it('that is answered 410 is given up at once and switches the hook off, which the trail says', async () => {
    const { id: hookId } = await make()
    const first = await tell()
    const second = await tell()
    receiver.behave(response => void response.writeHead(410).end())
    await attempt(first.id)
    expect((await listWebHooks(deps(), { limit: 10 })).items).toMatchObject([{ id: hookId, enabled: false, failed: 1, queued: 1 }])
    const trail = await test.db.select().from(audit).where(eq(audit.entityId, hookId)).orderBy(asc(audit.id))
    expect(trail.map(row => [row.action, row.actorKind])).toEqual([['web-hook.create', 'person'], ['web-hook.change', 'system']])
    await attempt(second.id)
    expect(receiver.received).toHaveLength(1)
    expect((await deliveries()).find(({ id }) => id === second.id)).toMatchObject({ state: 'failed', attempts: 0, lastError: expect.stringContaining('switched off') })
  })

  it('is repeated by hand under its first id, with a new time', async () => {
    const { id: hookId } = await make()
    const { id } = await tell()
    expect(await refusalOf(repeatDelivery(deps(), id))).toMatchObject({ code: 'conflict' })
    await attempt(id)
    await emptyQueue(test.db)
    expect(await repeatDelivery(deps(), id)).toMatchObject({ id, state: 'queued' })
    expect(await queuedJobs(test.db, 'web-hook')).toEqual([{ deliveryId: id }])
    await attempt(id, later)
    const [one, other] = receiver.received
    expect(other!.headers['webhook-id']).toBe(one!.headers['webhook-id'])
    expect(other!.body).toBe(one!.body)
    expect(Number(other!.headers['webhook-timestamp']) - Number(one!.headers['webhook-timestamp'])).toBe(60)
    expect((await listDeliveries(deps(), { hookId, limit: 10 })).items).toMatchObject([{ id, state: 'delivered', attempts: 2 }])
  })

  it('can be asked for as a test', async () => {
    const { id } = await make(['alert.opened'])
    await attempt((await testWebHook(deps(), id)).id)
    expect(JSON.parse(receiver.received[0]!.body)).toMatchObject({ type: 'hook.test', data: { hookId: id, hook: 'Night desk', askedBy: admin.name } })
  })
})

describe('a web hook', () => {
  it('is made for public addresses by HTTPS only, outside of the demo and of tests whatever else is set', async () => {
    for (const url of ['http://ops.example/', 'https://127.0.0.1/', 'https://localhost/', 'https://[::ffff:10.0.0.1]/']) {
      delete process.env.ALLOW_INTERNAL_WEB_HOOKS
      expect(await refusalOf(createWebHook(deps(), { name: 'X', url, events: ['alert.opened'] })), url).toMatchObject({ code: 'not-valid', paths: ['url'] })
      process.env.ALLOW_INTERNAL_WEB_HOOKS = '1'
      delete process.env.NULLBEAT_TEST
      expect(await refusalOf(createWebHook(deps(), { name: 'X', url, events: ['alert.opened'] })), url).toMatchObject({ code: 'not-valid', paths: ['url'] })
      process.env.NULLBEAT_TEST = '1'
    }
    const { id } = await make()
    delete process.env.ALLOW_INTERNAL_WEB_HOOKS
    expect(await refusalOf(changeWebHook(deps(), { id, url: 'https://10.0.0.1/' }))).toMatchObject({ code: 'not-valid', paths: ['url'] })
    expect((await listWebHooks(deps(), { limit: 10 })).items).toMatchObject([{ url: `${receiver.url}/told` }])
  })

  it('shows its secret once and never in lists or the trail; retired it is gone with it', async () => {
    const { id, secret } = await make()
    const shown = JSON.stringify([await listWebHooks(deps(), { limit: 10 }), await test.db.select().from(audit)])
    expect(shown).not.toContain(secret)
    expect(shown).not.toContain(secret.slice(10, 30))
    await retireWebHook(deps(), id)
    expect((await listWebHooks(deps(), { limit: 10 })).items).toEqual([])
    expect(await refusalOf(testWebHook(deps(), id))).toMatchObject({ code: 'not-found' })
    expect((await test.db.select().from(webHooks))[0]!.secret).toBe('')
  })

  it('that is not reached raises one alert to administrators, which closes when a message gets through', async () => {
    await make()
    const ids = [(await tell()).id, (await tell()).id]
    receiver.behave(response => void response.writeHead(503).end('closed for the night'))
    for (const id of ids) await attempt(id, now, true)
    const reconcile = () => reconcileAlerts({ db: test.db, actor: scheduleActor, now: later }, { kinds: ['web-hook-failing'] })
    await reconcile()
    await reconcile()
    expect(await test.db.select().from(alerts)).toMatchObject([{ state: 'open', severity: 'notice', count: 2, detail: expect.stringContaining('closed for the night') }])
    const { rows } = await test.db.execute<{ to: string }>(sql`SELECT to_address AS to FROM mails`)
    expect(rows.map(row => row.to)).toEqual([admin.email])
    receiver.behave(response => void response.writeHead(200).end())
    await repeatDelivery(deps(later), ids[0]!)
    await attempt(ids[0]!, later)
    await reconcile()
    expect(await test.db.select().from(alerts)).toMatchObject([{ state: 'closed', closeReason: 'The cause is gone.' }])
  })
})
