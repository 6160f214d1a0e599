import type { H3Event } from 'h3'
import { useSession } from 'h3'
import { hashToken, sessionMaxMs } from '~~/server/domain/auth/tokens'

export function publicUrl(): URL {
  return new URL(process.env.PUBLIC_URL || 'http://127.0.0.1:3000')
}

const isSecure = () => publicUrl().protocol === 'https:'
/** Behind TLS the cookie is Secure and bears the __Host- prefix; on plain HTTP it has another name. */
export const sessionCookieName = () => isSecure() ? '__Host-nullbeat' : 'nullbeat-session'

function sessionCookie(event: H3Event) {
  const password = process.env.NUXT_SESSION_PASSWORD
  if (!password || password.length < 32) throw new Error('SESSION_SECRET is missing or shorter than 32 characters.')
  return useSession<{ sid?: string }>(event, {
    name: sessionCookieName(),
    password,
    maxAge: sessionMaxMs / 1000,
    sessionHeader: false,
    cookie: { httpOnly: true, sameSite: 'lax', path: '/', secure: isSecure() },
  })
}

/** SHA-256 of the id in the cookie, or null. The cookie alone is worth nothing: the session table decides. */
export async function readSessionHash(event: H3Event): Promise<string | null> {
  const { data } = await sessionCookie(event)
  return typeof data.sid === 'string' ? hashToken(data.sid) : null
}

export async function writeSession(event: H3Event, sid: string): Promise<void> {
  const session = await sessionCookie(event)
  await session.clear()
  await session.update({ sid })
}

export async function dropSession(event: H3Event): Promise<void> {
  await (await sessionCookie(event)).clear()
}
