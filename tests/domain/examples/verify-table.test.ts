import { execFile } from 'node:child_process'
import { createHash } from 'node:crypto'
import { fileURLToPath } from 'node:url'
import { promisify } from 'node:util'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { canonicalJson } from '#shared/formats/canonical-json'
import { rotateSigningKey } from '~~/server/domain/tables/rotate-signing-key'
import { verifyTable } from '../../examples/verify-table.mjs'
import type { FeedServer } from '../../support/feed-server'
import { startFeed } from '../../support/feed-server'
import { addActor } from '../../support/fixtures'

// The verifier of the documentation, against what the server serves.
interface Keys { keys: { kid: string, x: string }[] }
let feed: FeedServer
let tableId: string
let text: string
let keys: Keys
const key = `nb_${'a'.repeat(40)}`
const get = async (path: string) => (await fetch(`${feed.url}/api/station/v1${path}`, { headers: { authorization: `Bearer ${key}`, accept: 'application/json' } })).text()

beforeAll(async () => {
  // Members in the order of RFC 8785 and letters beyond ASCII: what the verifier's own canonical form must get right.
  feed = await startFeed({ name: 'Straße “Ø” \\ \u2028 😀' })
  await feed.addKey(feed.station.id, key)
  tableId = (await feed.publish()).id
  text = await get(`/tables/${tableId}`)
  keys = JSON.parse(await get('/keys')) as Keys
})
afterAll(() => feed.close())

describe('the verifier of the documentation', () => {
  it('finds digest and signature of a served table to hold', () => {
    expect(verifyTable(text, keys)).toMatchObject({ id: tableId, revision: 1 })
    const { digest: _digest, signature: _signature, ...table } = JSON.parse(text) as Record<string, unknown>
    expect(verifyTable(text, keys)).toEqual(table)
    // However a program in between has written the same JSON.
    expect(verifyTable(JSON.stringify(JSON.parse(text), null, 2), keys)).toEqual(table)
  })

  it('refuses a table with one digit changed, and one whose digest was made to fit', () => {
    const changed = text.replace('"frequencyHz":437510000', '"frequencyHz":437510010')
    expect(changed).not.toBe(text)
    expect(() => verifyTable(changed, keys)).toThrow('The digest is not that of the table.')
    const { digest } = JSON.parse(text) as { digest: string }
    const attempt = () => verifyTable(changed.replace(digest, digestOf(changed)), keys)
    expect(attempt).toThrow('The signature does not verify.')
  })

  it('refuses a table by a key that is not in the set, or by another one under its name', async () => {
    expect(() => verifyTable(text, { keys: [] })).toThrow(/No key/)
    const other = await rotateSigningKey({ db: feed.db, now: feed.now, actor: await addActor(feed.db, ['administrator']) })
    const both = JSON.parse(await get('/keys')) as Keys
    expect(both.keys.map(({ kid }) => kid)).toEqual([other.kid, keys.keys[0]!.kid])
    expect(verifyTable(text, both)).toMatchObject({ id: tableId })
    expect(() => verifyTable(text, { keys: [{ ...both.keys[0]!, kid: keys.keys[0]!.kid }] })).toThrow('The signature does not verify.')
  })

  it('runs as the program that it is', async () => {
    const run = promisify(execFile)
    const { stdout } = await run(process.execPath, [fileURLToPath(new URL('../../examples/verify-table.mjs', import.meta.url)), tableId], { env: { PATH: process.env.PATH, NULLBEAT_URL: feed.url, NULLBEAT_KEY: key } })
    expect(stdout).toMatch(/^Revision 1 for .*, 1 retunes: digest and signature hold\.\n$/)
  })
})

/** As whoever forges a table would make it. */
function digestOf(served: string): string {
  const { digest: _digest, signature: _signature, ...table } = JSON.parse(served) as Record<string, unknown>
  return createHash('sha256').update(canonicalJson(table)).digest('hex')
}
