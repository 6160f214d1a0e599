import { eq } from 'drizzle-orm'
import { afterEach, beforeAll, describe, expect, it, vi } from 'vitest'
import { audit, mails, receivedMails } from '~~/server/database/schema'
import { listAudit } from '~~/server/domain/audit-trail/list-audit'
import { recordAudit } from '~~/server/domain/audit'
import type { PersonActor } from '~~/server/domain/context'
import { listMails } from '~~/server/domain/mails/list-mails'
import { listReceivedMails } from '~~/server/domain/mails/list-received-mails'
import { retryMail } from '~~/server/domain/mails/retry-mail'
import { settingsOverview } from '~~/server/domain/settings/settings-overview'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { addActor } from '../../support/fixtures'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let actor: PersonActor
const deps = () => ({ db: test.db, actor, now })
beforeAll(async () => {
  actor = await addActor(test.db, ['administrator'])
})
afterEach(() => vi.unstubAllEnvs())

async function addMail(state: 'queued' | 'sent' | 'failed', at = now) {
  const [row] = await test.db.insert(mails).values({ kind: 'alert', toName: 'Oda', toAddress: 'oda@ops.example', subject: 'S', text: 'secret text', html: '', messageId: `<${Math.random()}@x.example>`, state, attempts: 3, lastError: state === 'failed' ? '550 no' : null, createdAt: at }).returning()
  return row!
}

it('gives the trail newest first, of one thing or one kind, page by page', async () => {
  for (let n = 0; n < 5; n++) await recordAudit(deps(), { action: 'thing.change', entityKind: n % 2 === 0 ? 'even' : 'odd', entityId: `id-${n}`, before: { n: n - 1 }, after: { n } })
  const first = await listAudit(deps(), { limit: 2, entityKind: 'even' })
  expect(first.items.map(item => item.entityId)).toEqual(['id-4', 'id-2'])
  expect(first.items[0]).toMatchObject({ at: now.toISOString(), actorKind: 'person', actorName: actor.name, before: { n: 3 }, after: { n: 4 }, reason: null })
  expect((await listAudit(deps(), { limit: 2, entityKind: 'even', cursor: first.nextCursor! })).items.map(item => item.entityId)).toEqual(['id-0'])
  expect((await listAudit(deps(), { limit: 9, entityId: 'id-3' })).items).toHaveLength(1)
})

describe('mail', () => {
  it('is listed newest first without its text, page by page', async () => {
    const older = await addMail('sent', new Date(now.getTime() - 1000))
    const newer = await addMail('queued')
    const first = await listMails(deps(), { limit: 1 })
    expect(first.items).toEqual([expect.objectContaining({ id: newer.id, to: 'Oda <oda@ops.example>', state: 'queued' })])
    expect((await listMails(deps(), { limit: 1, cursor: first.nextCursor! })).items[0]!.id).toBe(older.id)
    expect(JSON.stringify(first)).not.toContain('secret text')
  })

  it('is tried again once it has failed, under its first Message-ID, and not otherwise', async () => {
    const failed = await addMail('failed')
    await emptyQueue(test.db)
    expect(await retryMail(deps(), failed.id)).toMatchObject({ state: 'queued', attempts: 3 })
    expect(await queuedJobs(test.db, 'mail')).toEqual([{ mailId: failed.id }])
    expect((await test.db.select().from(mails).where(eq(mails.id, failed.id)))[0]!.messageId).toBe(failed.messageId)
    expect(await refusalOf(retryMail(deps(), failed.id))).toMatchObject({ code: 'conflict' })
    expect(await refusalOf(retryMail(deps(), (await addMail('sent')).id))).toMatchObject({ code: 'conflict' })
    expect(await refusalOf(retryMail(deps(), actor.id))).toMatchObject({ code: 'not-found' })
    expect((await test.db.select().from(audit).where(eq(audit.entityId, failed.id))).map(row => row.action)).toEqual(['mail.retry'])
  })

  it('is counted beside the settings, with where it goes', async () => {
    vi.stubEnv('SMTP_URL', 'smtp://mail.example:25')
    vi.stubEnv('NULLBEAT_DEMO', '')
    await addMail('failed')
    expect(await settingsOverview(deps())).toMatchObject({ demo: false, mail: { local: false, queued: 2, failed: 1 } })
    vi.stubEnv('SMTP_URL', '')
    vi.stubEnv('NULLBEAT_DEMO', '1')
    expect(await settingsOverview(deps())).toMatchObject({ demo: true, mail: { local: true } })
  })
})

describe('what the product’s own mail server received', () => {
  const address = 'http://127.0.0.1:3000/welcome#token=abcDEF-123_xyz'
  beforeAll(async () => {
    await test.db.insert(receivedMails).values({ messageId: '<1@x.example>', fromAddress: 'nullbeat@ops.example', toAddresses: ['oda@ops.example'], subject: 'Welcome', text: `Here: ${address}`, html: `<a href="${address}">here</a>` })
  })

  it('is shown whole to those who may invite; to others without the token that would make them the person invited', async () => {
    vi.stubEnv('SMTP_URL', '')
    expect((await listReceivedMails(deps(), { limit: 10 })).items[0]).toMatchObject({ from: 'nullbeat@ops.example', to: ['oda@ops.example'], text: `Here: ${address}` })
    const reader = await addActor(test.db, ['reader'])
    const shown = await listReceivedMails({ db: test.db, actor: reader }, { limit: 10 })
    expect(shown.items[0]!.subject).toBe('Welcome')
    expect(JSON.stringify(shown)).not.toContain('abcDEF')
  })

  it('is nothing where mail goes to a server of the operator’s', async () => {
    vi.stubEnv('SMTP_URL', 'smtp://mail.example:25')
    expect(await refusalOf(listReceivedMails(deps(), { limit: 10 }))).toMatchObject({ code: 'not-found' })
  })
})
