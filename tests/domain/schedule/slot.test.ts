import { expect, it } from 'vitest'
import { claimSlot, finishSlot, lateness, releaseSlot } from '../../../server/domain/schedule/slot'
import { useTestDatabase } from '../../support/domain-test'

const test = useTestDatabase()
const now = new Date('2026-12-01T18:00:00.000Z')
const slot = (entity: string) => ({ kind: 'publish-night' as const, entity, instant: now })
const claim = (entity: string, then: () => Promise<void> = async () => {}) => test.db.transaction(async (tx) => {
  const claimed = await claimSlot({ db: tx, now }, slot(entity))
  if (claimed) await then()
  return claimed
})

it('a slot is taken by one of many that ask at once, and by nobody later', async () => {
  const claims = await Promise.all(Array.from({ length: 8 }, () => claim('a')))
  expect(claims.filter(Boolean)).toHaveLength(1)
  expect(await claim('a')).toBe(false)
  expect(await claim('b')).toBe(true)
})

it('nobody waits for another server that is at a slot, and a server that fails leaves it free', async () => {
  await expect(claim('c', async () => {
    expect(await claim('c')).toBe(false)
    throw new Error('died')
  })).rejects.toThrow('died')
  expect(await claim('c')).toBe(true)
})

it('a slot that is given back can be taken again', async () => {
  await test.db.transaction(async (tx) => {
    await claimSlot({ db: tx, now }, slot('d'))
    await releaseSlot({ db: tx }, slot('d'))
  })
  expect(await claim('d', async () => {})).toBe(true)
  await finishSlot({ db: test.db }, slot('d'), 'Done.')
})

it('lateness is said in minutes and hours, never rounded up', () => {
  expect([59_999, 60_000, 3_599_999, 3_600_000, 26 * 3_600_000].map(ms => lateness(now, new Date(now.getTime() + ms)))).toEqual(['on time', '1 min late', '59 min late', '1 h 0 min late', '26 h 0 min late'])
})
