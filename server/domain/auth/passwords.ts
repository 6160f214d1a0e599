import { Hash } from '@adonisjs/hash'
import { Scrypt } from '@adonisjs/hash/drivers/scrypt'
import { DomainError } from '../errors'

/** scrypt, N = 2^15, r = 8, p = 3: one of the settings that OWASP's password storage advice lists as equal. */
const hash = new Hash(new Scrypt({ cost: 32_768, blockSize: 8, parallelization: 3, maxMemory: 64 * 1024 * 1024 }))

/** From memory: what people choose most, longer than the least length after repetition. Compared in lower case. */
const common = ['password', 'passwort', '123456789012', '1234567890', 'qwertyuiop', 'qwerty123456', 'iloveyou', 'letmein', 'administrator', 'welcome', 'nullbeat', 'satellite', 'groundstation', 'abcdefghijkl', 'aaaaaaaaaaaa', 'changeme', 'doppler']

/** Of the four threads that Node works with aside; opening a connection to the database needs one, too. */
const atOnce = 2
let running = 0
const waiting: (() => void)[] = []

/** Many passwords tried at once wait here for each other and keep nobody else waiting. */
async function inTurn<T>(act: () => Promise<T>): Promise<T> {
  if (running < atOnce) running++
  else await new Promise<void>(resolve => waiting.push(resolve))
  try {
    return await act()
  }
  finally {
    const next = waiting.shift()
    if (next) next()
    else running--
  }
}

export const hashPassword = (password: string) => inTurn(() => hash.make(password))
export const verifyPassword = (stored: string, password: string) => inTurn(() => hash.verify(stored, password))

/** Refuses what is easily guessed: a common word with little round it, few different characters, one's own name. */
export function requireGoodPassword(password: string, about: readonly string[]): void {
  const lower = password.toLowerCase()
  const bare = lower.replace(/[^a-z]/g, '')
  const guessable = new Set(lower).size < 5
    || common.some(word => lower === word || bare === word || bare === word + word || lower.startsWith(word) && lower.length - word.length < 6)
    || about.some(text => text.length > 3 && lower.includes(text.toLowerCase()))
  if (guessable) throw new DomainError('not-valid', 'This password is easily guessed: take several unrelated words.', [{ path: 'password', message: 'Easily guessed: take several unrelated words.' }])
}

let decoy: Promise<string> | null = null
/** Verifies against nothing, in the time that a real verification takes. */
export async function verifyNothing(password: string): Promise<false> {
  decoy ??= hashPassword('no such person')
  await verifyPassword(await decoy, password)
  return false
}
