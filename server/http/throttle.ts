import type { H3Event } from 'h3'
import { getRequestIP } from 'h3'
import { RateLimiterDrizzle } from 'rate-limiter-flexible'
import { useDatabase } from '~~/server/database/client'
import { rateLimits } from '~~/server/database/schema'
import { DomainError } from '~~/server/domain/errors'

/**
 * Failed sign-ins are counted per account from one address, and per address over all accounts. An attacker elsewhere
 * uses up only his own count, so the owner is never locked out.
 */
let limiters: { pair: RateLimiterDrizzle, address: RateLimiterDrizzle } | null = null
function useLimiters() {
  const shared = { storeClient: useDatabase().db, schema: rateLimits, duration: 15 * 60 }
  limiters ??= {
    pair: new RateLimiterDrizzle({ ...shared, keyPrefix: 'sign-in', points: 8 }),
    address: new RateLimiterDrizzle({ ...shared, keyPrefix: 'address', points: 60 }),
  }
  return limiters
}

export const throttleSignIn = <T>(event: H3Event, email: string, attempt: () => Promise<T>) =>
  throttle(event, email.trim().toLowerCase().slice(0, 254), error => error.code === 'not-signed-in', attempt)

/** Whoever tries one-time addresses at random is counted like a failed sign-in. */
export const throttleOneTimeLink = <T>(event: H3Event, attempt: () => Promise<T>) =>
  throttle(event, 'one-time address', error => error.code === 'not-found', attempt)

/** A session left open is no way to try out passwords. */
export const throttlePasswordChange = <T>(event: H3Event, email: string, attempt: () => Promise<T>) =>
  throttle(event, email, error => error.fields.some(field => field.path === 'currentPassword'), attempt)

async function throttle<T>(event: H3Event, account: string, isFailure: (error: DomainError) => boolean, attempt: () => Promise<T>): Promise<T> {
  const { pair, address } = useLimiters()
  const ip = getRequestIP(event, { xForwardedFor: process.env.TRUST_PROXY === '1' }) ?? 'unknown'
  const keys = [{ limiter: pair, key: `${account}|${ip}` }, { limiter: address, key: ip }]
  for (const { limiter, key } of keys) await count(limiter, key)
  const outcome = await attempt().then(result => ({ result }), (error: unknown) => ({ error }))
  if ('error' in outcome && outcome.error instanceof DomainError && isFailure(outcome.error)) throw outcome.error
  // No failed attempt: what was counted is given back.
  if ('result' in outcome) await pair.delete(keys[0]!.key)
  else await pair.reward(keys[0]!.key)
  await address.reward(ip)
  if ('error' in outcome) throw outcome.error
  return outcome.result
}

/** Counted before it is tried: of a thousand attempts at once no more get through than one after the other. */
async function count(limiter: RateLimiterDrizzle, key: string): Promise<void> {
  const { consumedPoints, msBeforeNext } = await limiter.penalty(key)
  if (consumedPoints > limiter.points) throw new DomainError('too-many', 'Too many failed attempts: wait and try again.', [], Math.max(1, msBeforeNext / 1000))
}
