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
  for (const { limiter, key } of keys) {
    const state = await limiter.get(key)
    if (state && state.consumedPoints >= limiter.points) {
      throw new DomainError('too-many', 'Too many failed attempts: wait and try again.', [], Math.max(1, state.msBeforeNext / 1000))
    }
  }
  try {
    const result = await attempt()
    await pair.delete(keys[0]!.key)
    return result
  }
  catch (error) {
    if (error instanceof DomainError && isFailure(error)) await Promise.all(keys.map(({ limiter, key }) => limiter.penalty(key)))
    throw error
  }
}
