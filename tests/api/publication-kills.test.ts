import { expect, it } from 'vitest'
import { killWhilePublishing } from '../support/publication-kills'

it('two servers that publish, killed at five random moments, publish each table exactly once and whole', { timeout: 180_000 }, async () => {
  const figures = await killWhilePublishing(5, 20)
  console.info(figures)
  expect(figures.publications).toBe(100)
})
