import { and, eq, isNull } from 'drizzle-orm'
import { beforeAll, describe, expect, it } from 'vitest'
import type { Role } from '#shared/permissions'
import { audit, mails, oneTimeLinks, people, sessions } from '~~/server/database/schema'
import { hashPassword } from '~~/server/domain/auth/passwords'
import { startSession } from '~~/server/domain/auth/sign-in'
import { takeUpLink } from '~~/server/domain/auth/take-up-link'
import type { PersonActor } from '~~/server/domain/context'
import { changeMe } from '~~/server/domain/people/change-me'
import { changePerson } from '~~/server/domain/people/change-person'
import { invitePerson } from '~~/server/domain/people/invite-person'
import { listPeople } from '~~/server/domain/people/read-people'
import { inviteAgain } from '~~/server/domain/people/send-invitation'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { addActor, addPerson } from '../../support/fixtures'
import { queuedJobs } from '../../support/queued-jobs'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let passwordHash: string
let actor: PersonActor
const deps = () => ({ db: test.db, actor, now })
const openSessions = (personId: string) => test.db.$count(sessions, and(eq(sessions.personId, personId), isNull(sessions.endedAt)))
const active = (roles: Role[]) => addPerson(test.db, roles, { passwordHash })

beforeAll(async () => {
  passwordHash = await hashPassword('correct horse battery staple')
  actor = await addActor(test.db, ['administrator'], { name: 'Ada Administrator', passwordHash })
})

describe('an invitation', () => {
  it('makes a person without a password and a mail whose address carries a token that is stored only as a digest', async () => {
    const person = await invitePerson(deps(), { name: 'Oda, Operator', email: 'oda@ops.example', roles: ['operator', 'operator'], zone: 'Europe/Oslo' })
    expect(person).toMatchObject({ state: 'invited', roles: ['operator'], lastSeenAt: null })
    const [mail] = await test.db.select().from(mails).where(eq(mails.toAddress, 'oda@ops.example'))
    const token = /\/welcome#token=([\w-]{43})\b/.exec(mail!.text)?.[1]
    expect(mail).toMatchObject({ kind: 'invitation', toName: 'Oda, Operator', state: 'queued' })
    expect(token).toBeDefined()
    expect(await queuedJobs(test.db, 'mail')).toContainEqual({ mailId: mail!.id })
    const [link] = await test.db.select().from(oneTimeLinks).where(eq(oneTimeLinks.personId, person.id))
    expect(link!.expiresAt.toISOString()).toBe('2026-12-08T12:00:00.000Z')
    expect(JSON.stringify([link, await test.db.select().from(audit)])).not.toContain(token)
  })

  it('is refused to an address that is listed already, however it is written', async () => {
    const { email } = await active(['reader'])
    expect(await refusalOf(invitePerson(deps(), { name: 'Again', email, roles: ['reader'], zone: 'UTC' }))).toMatchObject({ code: 'conflict', paths: ['email'] })
  })

  it('can be sent anew, which ends the one before; not to somebody who is disabled', async () => {
    const person = await invitePerson(deps(), { name: 'Late', email: 'late@ops.example', roles: ['reader'], zone: 'UTC' })
    const before = await test.db.select().from(oneTimeLinks).where(eq(oneTimeLinks.personId, person.id))
    await inviteAgain(deps(), person.id)
    const after = await test.db.select().from(oneTimeLinks).where(eq(oneTimeLinks.personId, person.id))
    expect(after).toHaveLength(1)
    expect(after[0]!.tokenHash).not.toBe(before[0]!.tokenHash)
    expect(await test.db.$count(mails, eq(mails.toAddress, 'late@ops.example'))).toBe(2)
    await changePerson(deps(), person.id, { disabled: true })
    expect(await refusalOf(inviteAgain(deps(), person.id))).toMatchObject({ code: 'conflict' })
  })

  it('lets somebody who has forgotten the password choose another; the old one works until then', async () => {
    const person = await active(['reader'])
    await inviteAgain(deps(), person.id)
    const [mail] = await test.db.select().from(mails).where(eq(mails.toAddress, person.email))
    expect(mail!.subject).toContain('new password')
    expect((await test.db.select().from(people).where(eq(people.id, person.id)))[0]!.passwordHash).toBe(person.passwordHash)
    await takeUpLink({ db: test.db, now }, { token: /#token=([\w-]+)/.exec(mail!.text)![1]!, password: 'seven quiet herons at low tide' })
    expect((await test.db.select().from(people).where(eq(people.id, person.id)))[0]!.passwordHash).not.toBe(person.passwordHash)
  })
})

describe('changing a person', () => {
  it.each([['disabling', { disabled: true }], ['new roles', { roles: ['reader'] as Role[] }]])('ends every session at once: %s', async (_, change) => {
    const person = await active(['operator'])
    await startSession({ db: test.db, now }, person)
    await startSession({ db: test.db, now }, person)
    await changePerson(deps(), person.id, { name: 'Same session', zone: 'UTC' })
    expect(await openSessions(person.id)).toBe(2)
    await changePerson(deps(), person.id, change)
    expect(await openSessions(person.id)).toBe(0)
  })

  it('can be taken back: somebody disabled is enabled, and the trail tells both', async () => {
    const person = await active(['operator'])
    expect(await changePerson(deps(), person.id, { disabled: true })).toMatchObject({ state: 'disabled' })
    expect(await changePerson(deps(), person.id, { disabled: false })).toMatchObject({ state: 'active' })
    const rows = await test.db.select().from(audit).where(and(eq(audit.entityId, person.id), eq(audit.action, 'person.change')))
    expect(rows.map(row => row.after)).toEqual([{ disabledAt: now.toISOString() }, { disabledAt: null }])
  })

  it('never takes the last active administrator, neither by role nor by disabling; invited and disabled ones do not count', async () => {
    await addPerson(test.db, ['administrator'])
    await addPerson(test.db, ['administrator'], { passwordHash, disabledAt: now })
    expect(await refusalOf(changePerson(deps(), actor.id, { disabled: true }))).toMatchObject({ code: 'conflict' })
    expect(await refusalOf(changePerson(deps(), actor.id, { roles: ['operator'] }))).toMatchObject({ code: 'conflict' })
    expect(await changePerson(deps(), actor.id, { roles: ['administrator', 'operator'] })).toMatchObject({ state: 'active' })
  })

  it('leaves one when two administrators disable each other at the same moment', async () => {
    const other = await active(['administrator'])
    const both = await Promise.allSettled([changePerson(deps(), other.id, { disabled: true }), changePerson(deps(), actor.id, { disabled: true })])
    expect(both.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
    expect(await test.db.$count(people, and(eq(people.id, actor.id), isNull(people.disabledAt))) + await test.db.$count(people, and(eq(people.id, other.id), isNull(people.disabledAt)))).toBe(1)
  })

  it('says so when there is nobody of that id', async () => {
    expect(await refusalOf(changePerson(deps(), '00000000-0000-4000-8000-000000000000', { name: 'X' }))).toMatchObject({ code: 'not-found' })
  })
})

it('changes one’s own name and zone and nothing else', async () => {
  const me = await addActor(test.db, ['reader'])
  expect(await changeMe({ db: test.db, actor: me, now }, { zone: 'Asia/Tokyo' })).toEqual({ id: me.id, name: me.name, email: me.email, roles: ['reader'], zone: 'Asia/Tokyo' })
  expect((await test.db.select().from(people).where(eq(people.id, me.id)))[0]).toMatchObject({ zone: 'Asia/Tokyo', name: me.name })
})

it('lists people by name, page by page, with when they were last there', async () => {
  const person = await addPerson(test.db, ['reader'], { passwordHash, name: 'aaa first' })
  await startSession({ db: test.db, now }, person)
  const first = await listPeople(deps(), { limit: 1 })
  expect(first.items).toEqual([expect.objectContaining({ id: person.id, state: 'active', lastSeenAt: '2026-12-01T12:00:00.000Z' })])
  const second = await listPeople(deps(), { limit: 1000, cursor: first.nextCursor! })
  expect(second.items).toHaveLength(await test.db.$count(people) - 1)
  expect(JSON.stringify(second)).not.toMatch(/scrypt|passwordHash/)
})
