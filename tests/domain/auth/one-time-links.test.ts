import { eq } from 'drizzle-orm'
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import type { Database } from '~~/server/database/client'
import { openDatabase } from '~~/server/database/client'
import { audit, oneTimeLinks, people, sessions } from '~~/server/database/schema'
import { ensureFirstAdministrator } from '~~/server/domain/auth/ensure-first-administrator'
import { findSession } from '~~/server/domain/auth/find-session'
import { lookAtOneTimeLink, makeOneTimeLink } from '~~/server/domain/auth/one-time-links'
import { signIn } from '~~/server/domain/auth/sign-in'
import { takeUpLink } from '~~/server/domain/auth/take-up-link'
import { hashToken } from '~~/server/domain/auth/tokens'
import { createTestDatabase } from '../../support/database'
import { refusalOf } from '../../support/domain-test'
import { addPerson } from '../../support/fixtures'

const now = new Date('2026-12-01T12:00:00.000Z')
const day = 24 * 3600_000
const password = 'seven unrelated garden words'
const tokenOf = (address: string) => new URL(address, 'http://x.example').hash.replace('#token=', '')

let database: Database
let drop: () => Promise<void>
const at = (date = now) => ({ db: database.db, now: date })
beforeEach(async () => {
  const made = await createTestDatabase()
  database = openDatabase(made.url)
  drop = made.drop
})
afterEach(async () => {
  await database.close()
  await drop()
  vi.unstubAllEnvs()
})

describe('an empty installation', () => {
  it('gives an address that makes its first administrator, who is signed in and then signs in by password', async () => {
    vi.stubEnv('PUBLIC_URL', 'https://ops.example/')
    const address = (await ensureFirstAdministrator(at()))!
    expect(address).toMatch(/^https:\/\/ops\.example\/welcome#token=[\w-]{43}$/)
    expect(await lookAtOneTimeLink(at(), tokenOf(address))).toEqual({ kind: 'first-administrator', name: null, email: null })
    const { user, sid } = await takeUpLink(at(new Date(now.getTime() + 400 * day)), { token: tokenOf(address), password, name: 'First Person', email: 'first@ops.example' })
    expect(user).toMatchObject({ name: 'First Person', email: 'first@ops.example', roles: ['administrator'] })
    expect(await findSession(at(new Date(now.getTime() + 400 * day)), hashToken(sid))).toMatchObject({ id: user.id })
    expect((await signIn(at(), { email: 'First@ops.example', password })).user.id).toBe(user.id)
    expect(await ensureFirstAdministrator(at())).toBeNull()
    expect((await database.db.select().from(audit)).map(row => row.action)).toEqual(['person.take-up', 'person.sign-in', 'person.sign-in'])
  })

  it('asks for what is missing, and the address still works after', async () => {
    const token = tokenOf((await ensureFirstAdministrator(at()))!)
    expect(await refusalOf(takeUpLink(at(), { token, password }))).toMatchObject({ code: 'not-valid', paths: ['name', 'email'] })
    expect(await refusalOf(takeUpLink(at(), { token, password: 'aaaaaaaaaaaa', name: 'F', email: 'f@ops.example' }))).toMatchObject({ code: 'not-valid', paths: ['password'] })
    expect((await takeUpLink(at(), { token, password, name: 'F', email: 'f@ops.example' })).user.name).toBe('F')
  })

  it('gives a new address at each start; the one before stops working', async () => {
    const old = tokenOf((await ensureFirstAdministrator(at()))!)
    const fresh = tokenOf((await ensureFirstAdministrator(at()))!)
    expect(await refusalOf(lookAtOneTimeLink(at(), old))).toMatchObject({ code: 'not-found' })
    expect(await lookAtOneTimeLink(at(), fresh)).toMatchObject({ kind: 'first-administrator' })
    expect(await database.db.$count(oneTimeLinks)).toBe(1)
  })

  it('has one first administrator, however many use the address at once', async () => {
    const token = tokenOf((await ensureFirstAdministrator(at()))!)
    const tries = await Promise.allSettled([1, 2, 3].map(n => takeUpLink(at(), { token, password, name: `P${n}`, email: `p${n}@ops.example` })))
    expect(tries.filter(result => result.status === 'fulfilled')).toHaveLength(1)
    expect(await database.db.$count(people)).toBe(1)
  })

  it('makes none where somebody has come in another way', async () => {
    const token = tokenOf((await ensureFirstAdministrator(at()))!)
    await addPerson(database.db, ['reader'])
    expect(await refusalOf(takeUpLink(at(), { token, password, name: 'F', email: 'f@ops.example' }))).toMatchObject({ code: 'conflict' })
  })
})

describe('an invitation', () => {
  it('shows whom it is for, sets the password once, ends other sessions and signs in', async () => {
    const person = await addPerson(database.db, ['operator'])
    const token = tokenOf((await makeOneTimeLink(at(), { kind: 'invitation', personId: person.id })).path)
    expect(await lookAtOneTimeLink(at(), token)).toEqual({ kind: 'invitation', name: person.name, email: person.email })
    await database.db.insert(sessions).values({ idHash: 'elsewhere', personId: person.id, expiresAt: new Date(now.getTime() + day) })
    // Name and address are the invitation's, whatever is sent along.
    const { user, sid } = await takeUpLink(at(), { token, password, name: 'Somebody else', email: 'other@ops.example' })
    expect(user).toMatchObject({ id: person.id, name: person.name, email: person.email, roles: ['operator'] })
    expect((await database.db.select().from(sessions).where(eq(sessions.idHash, 'elsewhere')))[0]!.endedAt).toEqual(now)
    expect(await findSession(at(), hashToken(sid))).not.toBeNull()
    expect(await refusalOf(takeUpLink(at(), { token, password }))).toMatchObject({ code: 'not-found' })
    expect(await refusalOf(lookAtOneTimeLink(at(), token))).toMatchObject({ code: 'not-found' })
  })

  it('sets one password when two use the address at once', async () => {
    const person = await addPerson(database.db, ['operator'])
    const token = tokenOf((await makeOneTimeLink(at(), { kind: 'invitation', personId: person.id })).path)
    const tries = await Promise.allSettled(['one', 'two'].map(word => takeUpLink(at(), { token, password: `${password} ${word}` })))
    expect(tries.map(result => result.status).sort()).toEqual(['fulfilled', 'rejected'])
  })

  it('works for seven days and not a moment longer, nor for somebody disabled', async () => {
    const person = await addPerson(database.db, ['operator'])
    const token = tokenOf((await makeOneTimeLink(at(), { kind: 'invitation', personId: person.id })).path)
    await lookAtOneTimeLink(at(new Date(now.getTime() + 7 * day - 1)), token)
    expect(await refusalOf(takeUpLink(at(new Date(now.getTime() + 7 * day)), { token, password }))).toMatchObject({ code: 'not-found' })
    await database.db.update(people).set({ disabledAt: now })
    expect(await refusalOf(takeUpLink(at(), { token, password }))).toMatchObject({ code: 'not-found' })
  })

  it('refuses a password that holds the person’s own name or address', async () => {
    const person = await addPerson(database.db, ['operator'], { name: 'Willoughby', email: 'wil.person@ops.example' })
    const token = tokenOf((await makeOneTimeLink(at(), { kind: 'invitation', personId: person.id })).path)
    for (const guess of ['my willoughby 77', 'wil.person and so on']) expect(await refusalOf(takeUpLink(at(), { token, password: guess }))).toMatchObject({ code: 'not-valid', paths: ['password'] })
  })

  it('stores only a digest of the token', async () => {
    const person = await addPerson(database.db, ['operator'])
    const token = tokenOf((await makeOneTimeLink(at(), { kind: 'invitation', personId: person.id })).path)
    expect(JSON.stringify(await database.db.select().from(oneTimeLinks))).not.toContain(token)
  })
})
