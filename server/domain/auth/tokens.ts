import { createHash, randomBytes } from 'node:crypto'

/** Idle and absolute end of a session. */
export const sessionIdleMs = 12 * 3600_000
export const sessionMaxMs = 7 * 24 * 3600_000

/** 256 random bits; only their SHA-256 is stored. */
export const newToken = () => randomBytes(32).toString('base64url')
export const hashToken = (token: string) => createHash('sha256').update(token).digest('hex')
