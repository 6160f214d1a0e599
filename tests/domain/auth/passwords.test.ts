import { and, eq, isNull } from 'drizzle-orm'
import { expect, it } from 'vitest'
import { audit, people, sessions } from '~~/server/database/schema'
import { changePassword } from '~~/server/domain/auth/change-password'
import { hashPassword, verifyPassword } from '~~/server/domain/auth/passwords'
import { signIn } from '~~/server/domain/auth/sign-in'
import { hashToken } from '~~/server/domain/auth/tokens'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import { addActor } from '../../support/fixtures'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
const old = 'seven unrelated garden words'
const fresh = 'another row of odd things'

async function signedInTwice() {
  const person = await addActor(test.db, ['operator'], { passwordHash: await hashPassword(old) })
  const here = await signIn({ db: test.db, now }, { email: person.email, password: old })
  await signIn({ db: test.db, now }, { email: person.email, password: old })
  return { ...person, sessionHash: hashToken(here.sid) }
}
const openSessions = (personId: string) => test.db.select().from(sessions).where(and(eq(sessions.personId, personId), isNull(sessions.endedAt)))

it('changes a password, ends every other session and leaves this one; the trail holds neither password', async () => {
  const actor = await signedInTwice()
  await changePassword({ db: test.db, actor, now }, { currentPassword: old, newPassword: fresh })
  expect((await openSessions(actor.id)).map(session => session.idHash)).toEqual([actor.sessionHash])
  expect(await refusalOf(signIn({ db: test.db, now }, { email: actor.email, password: old }))).toMatchObject({ code: 'not-signed-in' })
  expect((await signIn({ db: test.db, now }, { email: actor.email, password: fresh })).user.id).toBe(actor.id)
  const trail = await test.db.select().from(audit).where(eq(audit.entityId, actor.id))
  expect(trail.map(row => row.action)).toContain('person.change-password')
  expect(JSON.stringify(trail)).not.toMatch(/garden|scrypt/)
})

it('changes nothing when the present password is wrong or the new one easily guessed', async () => {
  const actor = await signedInTwice()
  expect(await refusalOf(changePassword({ db: test.db, actor, now }, { currentPassword: fresh, newPassword: fresh }))).toMatchObject({ code: 'not-valid', paths: ['currentPassword'] })
  expect(await refusalOf(changePassword({ db: test.db, actor, now }, { currentPassword: old, newPassword: 'password1234' }))).toMatchObject({ code: 'not-valid', paths: ['newPassword'] })
  expect(await openSessions(actor.id)).toHaveLength(2)
  const [row] = await test.db.select().from(people).where(eq(people.id, actor.id))
  expect(await verifyPassword(row!.passwordHash!, old)).toBe(true)
})
