import { expect, it } from 'vitest'
import { killWhileMailing } from '../support/mail-kills'

it('a server killed at five random moments while it mails loses no mail and repeats at most one a kill, under the same Message-ID', { timeout: 180_000 }, async () => {
  const figures = await killWhileMailing(5, 12)
  console.info(figures)
  expect(figures).toMatchObject({ mails: 60, lost: 0 })
  expect(figures.duplicates).toBeLessThanOrEqual(figures.kills)
})
