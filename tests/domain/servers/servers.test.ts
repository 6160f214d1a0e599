import { eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { alerts, mails, servers, settings } from '~~/server/database/schema'
import { reconcileAlerts } from '~~/server/domain/alerts/reconcile-alerts'
import type { PersonActor } from '~~/server/domain/context'
import { scheduleActor } from '~~/server/domain/context'
import { lifecycle } from '~~/server/domain/schedule/lifecycle'
import { announceServer, beatServer, endServer } from '~~/server/domain/servers/announce-server'
import { forgetServer } from '~~/server/domain/servers/forget-server'
import { listServers } from '~~/server/domain/servers/list-servers'
import { sendHeartbeat } from '~~/server/domain/servers/send-heartbeat'
import { changeSettings } from '~~/server/domain/settings/change-settings'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { addActor } from '../../support/fixtures'
import type { HttpReceiver } from '../../support/http-receiver'
import { startHttpReceiver } from '../../support/http-receiver'

// Who watches whom, and when silence is told: common practice of dead-man switches and cluster membership.
const test = useTestDatabase()
const now = new Date()
const seenAgo = (id: string, seconds: number) => test.db.update(servers).set({ seenAt: sql`clock_timestamp() - make_interval(secs => ${seconds})` }).where(eq(servers.id, id))
const look = () => reconcileAlerts({ db: test.db, actor: scheduleActor, now }, { kinds: ['server-silent'] })
const standing = async () => (await test.db.select().from(alerts)).filter(({ state }) => state !== 'closed')
const announce = (host: string, pid: number, dead: number[] = []) => announceServer({ db: test.db }, { host, pid, role: 'server' }, one => !dead.includes(one))

beforeEach(async () => {
  await test.db.delete(servers)
  await test.db.delete(alerts)
  lifecycle.steadySince = 0
})

describe('a process on the database', () => {
  it('that is not seen for a minute without having stopped raises one alert to on-call, which closes when it is back', async () => {
    const onCall = await addActor(test.db, ['on-call'])
    const [a, b, c] = [await announce('north', 1), await announce('north', 2), await announce('south', 1)]
    await seenAgo(a, 59)
    await seenAgo(b, 61)
    await endServer({ db: test.db }, c)
    await seenAgo(c, 300)
    await look()
    await look()
    expect(await standing()).toMatchObject([{ cause: `server-silent:${b}`, severity: 'call', title: 'Server 2 on north is silent' }])
    expect((await test.db.select().from(mails)).map(mail => mail.toAddress)).toEqual([onCall.email])
    expect((await listServers({ db: test.db })).items.map(({ id, state }) => [id, state])).toEqual([[a, 'alive'], [b, 'silent'], [c, 'stopped']])
    expect(await beatServer({ db: test.db }, b)).toBe(true)
    await look()
    expect(await standing()).toEqual([])
  })

  it('is forgotten after a day, or when somebody says so, but not while it lives', async () => {
    const admin = await addActor(test.db, ['administrator'])
    const [old, gone, alive] = [await announce('north', 1), await announce('north', 2), await announce('north', 3)]
    await seenAgo(old, 24 * 3600 + 5)
    await seenAgo(gone, 120)
    await look()
    expect((await standing()).map(({ cause }) => cause)).toEqual([`server-silent:${gone}`])
    const deps = { db: test.db, actor: admin, now }
    expect(await refusalOf(forgetServer(deps, alive))).toMatchObject({ code: 'conflict' })
    await forgetServer(deps, gone)
    expect(await standing()).toEqual([])
  })

  it('takes the place of one that died on its host, and of no other', async () => {
    const [dead, living, elsewhere] = [await announce('north', 11), await announce('north', 12), await announce('south', 11)]
    await announce('north', 13, [11])
    const stopped = (await test.db.select().from(servers)).filter(({ stoppedAt }) => stoppedAt !== null).map(({ id }) => id)
    expect(stopped).toEqual([dead])
    expect([living, elsewhere]).not.toContain(dead)
  })

  it('that was itself cut off a moment ago, as all are when the database was away, calls nobody silent yet and takes no call back', async () => {
    const [a, b] = [await announce('north', 1), await announce('north', 2)]
    await seenAgo(a, 120)
    lifecycle.steadySince = Date.now() - 5000
    await look()
    expect(await standing()).toEqual([])
    lifecycle.steadySince = Date.now() - 31_000
    await look()
    expect(await standing()).toHaveLength(1)
    lifecycle.steadySince = Date.now()
    await seenAgo(b, 120)
    await look()
    expect(await standing()).toHaveLength(1)
  })
})

describe('the heartbeat outward', () => {
  let receiver: HttpReceiver
  let admin: PersonActor
  beforeAll(async () => {
    receiver = await startHttpReceiver()
    admin = await addActor(test.db, ['administrator'])
  })
  afterAll(() => receiver.close())
  const outward = { policy: { plain: true, internal: true }, timeoutMs: 500 }
  const send = (wokeMsAgo = 1000) => sendHeartbeat({ db: test.db, now }, { wokeMsAgo, outward })
  const last = async () => (await listServers({ db: test.db })).heartbeat

  it('is sent while the schedule wakes, and ceases when it has not woken for a minute', async () => {
    expect(await send()).toBeNull()
    process.env.ALLOW_INTERNAL_HEARTBEAT = '1'
    await changeSettings({ db: test.db, actor: admin, now }, { heartbeatUrl: `${receiver.url}/alive` })
    expect(await send()).toBe(true)
    expect(receiver.received).toMatchObject([{ method: 'GET', path: '/alive' }])
    expect(await last()).toEqual({ url: `${receiver.url}/alive`, last: { at: now.toISOString(), ok: true, detail: 'Answered 204.' } })
    expect(await send(60_001)).toBeNull()
    expect(receiver.received).toHaveLength(1)
  })

  it('says when it was not answered as it should', async () => {
    receiver.behave(response => void response.writeHead(500).end())
    expect(await send()).toBe(false)
    expect((await last()).last).toMatchObject({ ok: false, detail: 'Answered 500.' })
  })

  it('goes to public addresses only, unless the operator opens it', async () => {
    delete process.env.ALLOW_INTERNAL_HEARTBEAT
    expect(await refusalOf(changeSettings({ db: test.db, actor: admin, now }, { heartbeatUrl: 'http://10.0.0.1/' }))).toMatchObject({ code: 'not-valid', paths: ['heartbeatUrl'] })
    await test.db.delete(settings)
    expect((await last()).url).toBeNull()
  })
})
