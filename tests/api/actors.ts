import { createHash, randomBytes } from 'node:crypto'
import { eq } from 'drizzle-orm'
import type { KeyScope, Role } from '../../shared/permissions'
import type { Db } from '../../server/database/client'
import { apiKeys, people } from '../../server/database/schema'
import { hashPassword } from '../../server/domain/auth/passwords'
import { addPerson } from '../support/fixtures'

export type Headers = Record<string, string>
export const password = 'seven unrelated garden words'

/** Signs in and gives the cookie, as a browser would send it back. */
export async function signIn(url: string, email: string): Promise<Headers> {
  const response = await fetch(`${url}/api/auth/sign-in`, { method: 'POST', headers: { 'content-type': 'application/json' }, body: JSON.stringify({ email, password }) })
  if (response.status !== 200) throw new Error(`Signing in as ${email} answered ${response.status}: ${await response.text()}`)
  return { cookie: response.headers.getSetCookie().map(cookie => cookie.split(';', 1)[0]).join('; ') }
}

export async function addKey(db: Db, scope: KeyScope, stationId: string | null = null, revokedAt: Date | null = null): Promise<Headers> {
  const key = `nb_${randomBytes(20).toString('hex')}`
  await db.insert(apiKeys).values({ name: `${scope} key`, prefix: key.slice(0, 11), keyHash: createHash('sha256').update(key).digest('hex'), scope, stationId, revokedAt })
  return { authorization: `Bearer ${key}` }
}

const letters: Record<Role, string> = { 'flight-dynamics': 'F', 'operator': 'O', 'on-call': 'C', 'administrator': 'A', 'reader': 'R' }

export interface Actor {
  name: string
  headers: Headers
  /** What the person or key is, for the expectation; nobody: what is not open answers 401. */
  is: { role: string } | { scope: KeyScope } | 'nobody'
}

/** Everyone who may stand before a route: each role, each scope, and those who are nobody, no longer or not yet. */
export async function makeActors(url: string, db: Db, stations: { id: string }[]): Promise<Actor[]> {
  const passwordHash = await hashPassword(password)
  const actors: Actor[] = [{ name: 'no session', headers: {}, is: 'nobody' }]
  for (const [role, letter] of Object.entries(letters) as [Role, string][]) {
    const { email } = await addPerson(db, [role], { passwordHash })
    actors.push({ name: role, headers: await signIn(url, email), is: { role: letter } })
  }
  const signedOut = await addPerson(db, ['administrator'], { passwordHash })
  const ended = await signIn(url, signedOut.email)
  await fetch(`${url}/api/auth/sign-out`, { method: 'POST', headers: ended })
  actors.push({ name: 'ended session of an administrator', headers: ended, is: 'nobody' })
  const disabled = await addPerson(db, ['administrator'], { passwordHash })
  actors.push({ name: 'session of a disabled administrator', headers: await signIn(url, disabled.email), is: 'nobody' })
  await db.update(people).set({ disabledAt: new Date() }).where(eq(people.id, disabled.id))
  actors.push({ name: 'a cookie made up', headers: { cookie: 'nullbeat-session=Fe26.2**made-up' }, is: 'nobody' })
  for (const scope of ['elements:write', 'read', 'metrics'] as const) actors.push({ name: `${scope} key`, headers: await addKey(db, scope), is: { scope } })
  actors.push({ name: 'station key', headers: await addKey(db, 'station', stations[0]!.id), is: { scope: 'station' } })
  actors.push({ name: 'another station’s key', headers: await addKey(db, 'station', stations[1]!.id), is: { scope: 'station' } })
  actors.push({ name: 'revoked key', headers: await addKey(db, 'read', null, new Date()), is: 'nobody' })
  actors.push({ name: 'revoked station key', headers: await addKey(db, 'station', stations[0]!.id, new Date()), is: 'nobody' })
  actors.push({ name: 'a key made up', headers: { authorization: `Bearer nb_${'a'.repeat(40)}` }, is: 'nobody' })
  return actors
}
