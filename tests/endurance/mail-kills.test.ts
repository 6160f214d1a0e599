import { expect, it } from 'vitest'
import { killWhileMailing } from '../support/mail-kills'

it('a server killed at 100 random moments while it mails loses no mail and repeats at most one a kill, under the same Message-ID', async () => {
  const figures = await killWhileMailing(100, 12)
  console.info(figures)
  expect(figures).toMatchObject({ mails: 1200, lost: 0 })
  expect(figures.duplicates).toBeLessThanOrEqual(figures.kills)
})
