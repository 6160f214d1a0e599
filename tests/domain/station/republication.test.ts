import { setTimeout as wait } from 'node:timers/promises'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { verifyTable } from '../../examples/verify-table.mjs'
import type { FeedServer } from '../../support/feed-server'
import { startFeed } from '../../support/feed-server'
import { readTdm } from '../../unit/formats/tdm-reader'

// A table is published anew again and again while it is read in every notation: each answer is of one revision, whole.
let feed: FeedServer
const key = `nb_${'a'.repeat(40)}`
const retuneCount = 40
beforeAll(async () => {
  feed = await startFeed()
  await feed.addKey(feed.station.id, key)
})
afterAll(() => feed.close())

/** Every row of a revision says which one it is: 1 Hz for each. */
const retunesOf = (revision: number, aos: Date) => Array.from({ length: retuneCount }, (_, i) => ({
  at: new Date(aos.getTime() + i * 10_000).toISOString(), frequencyHz: 437_500_000 + 1000 * i + revision, slopeHzPerS: 0, dopplerHz: 0, rangeRateMps: 0, azimuthDeg: 0, elevationDeg: 10, residualMinHz: 0, residualMaxHz: 0, lossDb: 0,
}))
const revisionOfRows = (frequencies: number[]) => new Set(frequencies.map((hz, i) => hz - 437_500_000 - 1000 * i))

interface Seen { revision: number, digest: string }

/** What an answer says of itself, by each of the places where it says it; they are all to be one. */
async function read(tableId: string, accept: string, keys: { keys: object[] }): Promise<Seen> {
  const response = await fetch(`${feed.url}/api/station/v1/tables/${tableId}`, { headers: { authorization: `Bearer ${key}`, accept } })
  expect(response.status).toBe(200)
  const text = await response.text()
  const [digest, revision] = [response.headers.get('table-digest')!.replace('sha-256=', ''), Number(response.headers.get('table-revision'))]
  expect(response.headers.get('etag')).toMatch(new RegExp(`^"${digest}-`))
  if (accept === 'application/json') {
    const served = JSON.parse(text) as { digest: string, signature: string }
    const table = verifyTable(text, keys) as { revision: number, retunes: { frequencyHz: number }[] }
    expect([served.digest, served.signature, table.revision]).toEqual([digest, response.headers.get('table-signature'), revision])
    expect([...revisionOfRows(table.retunes.map(({ frequencyHz }) => frequencyHz))]).toEqual([revision])
  }
  else if (accept === 'text/csv') {
    const [head, ...rows] = text.trimEnd().split('\r\n').map(line => line.split(/,(?=(?:[^"]*"[^"]*")*[^"]*$)/))
    const column = (name: string) => rows.map(row => row[head!.indexOf(name)]!)
    expect(rows).toHaveLength(retuneCount)
    expect([new Set(column('digest')), new Set(column('revision')), revisionOfRows(column('frequencyHz').map(Number))]).toEqual([new Set([digest]), new Set([String(revision)]), new Set([revision])])
  }
  else {
    const message = readTdm(text)
    expect(message.comments.header).toEqual(expect.arrayContaining([`Digest ${digest}`, expect.stringMatching(new RegExp(`^Revision ${revision}(,|$)`))]))
    expect([...revisionOfRows(message.records.map(({ value }) => value))]).toEqual([revision])
  }
  return { revision, digest }
}

describe('while a table is published anew', () => {
  it('every reader gets one revision whole in every notation, and never an older one after a newer', async () => {
    const aos = new Date(feed.now.getTime() + 3600_000)
    const table = await feed.publish({ retunes: retunesOf(1, aos) }, aos)
    const keys = await (await fetch(`${feed.url}/api/station/v1/keys`, { headers: { authorization: `Bearer ${key}` } })).json() as { keys: object[] }
    let publishing = true
    const publish = async () => {
      for (let number = 2; number <= 10; number++) await feed.republish(table, number, { retunes: retunesOf(number, aos) })
      publishing = false
    }
    const reader = async (accept: string): Promise<Seen[]> => {
      const seen: Seen[] = []
      while (publishing || seen.at(-1)?.revision !== 10) {
        seen.push(await read(table.id, accept, keys))
        await wait(20)
      }
      return seen
    }
    const [, ...readers] = await Promise.all([publish(), ...['application/json', 'application/json', 'text/csv', 'text/plain'].map(reader)])
    const digests = new Map<number, Set<string>>()
    for (const seen of readers) {
      expect(seen.map(({ revision }) => revision)).toEqual(seen.map(({ revision }) => revision).sort((a, b) => a - b))
      for (const { revision, digest } of seen) digests.set(revision, new Set([...digests.get(revision) ?? [], digest]))
    }
    // Readers saw some of it happen, and one digest a revision.
    expect(digests.size).toBeGreaterThan(3)
    for (const [revision, each] of digests) expect(each.size, `revision ${revision}`).toBe(1)
  })
})
