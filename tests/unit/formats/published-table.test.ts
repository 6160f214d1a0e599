import { describe, expect, it } from 'vitest'
import { cautionFor } from '#shared/formats/cautions'
import { canonicalTableBytes, publishedTableSchema, servedTableSchema } from '#shared/formats/published-table'
import { servedTable } from './table-fixture'

const text = (bytes: Uint8Array) => new TextDecoder().decode(bytes)
const withoutSeal = () => {
  const { digest: _d, signature: _s, ...table } = servedTable()
  return table
}

describe('a published table', () => {
  it('passes its schema, sealed and unsealed', () => {
    expect(servedTableSchema.parse(servedTable())).toEqual(servedTable())
    expect(publishedTableSchema.parse(withoutSeal())).toEqual(withoutSeal())
  })

  it('is digested without digest and signature, whatever the order of its members', () => {
    const reordered = Object.fromEntries(Object.entries(servedTable()).reverse()) as ReturnType<typeof servedTable>
    expect(text(canonicalTableBytes(reordered))).toBe(text(canonicalTableBytes(withoutSeal())))
    expect(JSON.parse(text(canonicalTableBytes(servedTable())))).toEqual(withoutSeal())
    expect(text(canonicalTableBytes(servedTable({ revision: 4 })))).not.toBe(text(canonicalTableBytes(servedTable())))
  })

  it('refuses what is not whole or not in its units', () => {
    const wrong: [string, object][] = [
      ['an instant without milliseconds', { publishedAt: '2026-11-30T07:00:00Z' }], ['an instant with an offset', { publishedAt: '2026-11-30T07:00:00.000+01:00' }], ['no retune', { retunes: [] }], ['an unknown member', { state: 'published' }],
      ['a number that is none', { margin: Number.NaN }], ['a verdict of another name', { verdict: 'good' }], ['a digest in capitals', { digest: 'B'.repeat(64) }], ['a signature that is not detached', { signature: 'a.b.c' }], ['a revision of zero', { revision: 0 }], ['no caution', { caution: '' }],
    ]
    for (const [what, change] of wrong) expect(servedTableSchema.safeParse({ ...servedTable(), ...change }).success, what).toBe(false)
    expect(publishedTableSchema.safeParse(servedTable()).success).toBe(false)
  })

  it('carries a caution: on the uplink about licence and coordination, on both about the station\'s own rules', () => {
    expect(cautionFor('uplink')).toMatch(/licence.*coordinated frequency.*licensed operators.*interlocks and local rules/)
    expect(cautionFor('downlink')).toMatch(/advice.*interlocks and local rules/)
    expect(cautionFor('downlink').length).toBeLessThan(cautionFor('uplink').length)
  })
})
