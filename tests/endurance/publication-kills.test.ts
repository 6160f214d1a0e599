import { expect, it } from 'vitest'
import { killWhilePublishing } from '../support/publication-kills'

it('two servers that publish, killed at 200 random moments, publish each table exactly once and whole', async () => {
  const figures = await killWhilePublishing(200, 10)
  console.info(figures)
  expect(figures.publications).toBe(2000)
})
