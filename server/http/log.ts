import pino from 'pino'

/** Structured, one line an event, to standard output; never a password, key, token or cookie. */
export const log = pino({
  level: process.env.LOG_LEVEL || 'info',
  base: { product: 'nullbeat' },
  timestamp: pino.stdTimeFunctions.isoTime,
  redact: { paths: ['password', 'key', 'token', 'authorization', 'cookie', '*.password', '*.key', '*.token', '*.authorization', '*.cookie'], censor: '[withheld]' },
})
