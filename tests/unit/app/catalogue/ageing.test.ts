import { describe, expect, it } from 'vitest'
import { ageingSentence, ageingSource } from '~/utils/catalogue/ageing'

const accuracy = { source: 'learned' as const, pairs: 28, floorKm: 0.5, growthKmPerDay: 1.23, bins: [], prior: { floorKm: 0.5, growthKmPerDay: 1.5 } }

describe('words on how fast elements age', () => {
  it('name the figures and how many pairs they were learned from', () => {
    expect(ageingSentence(accuracy)).toBe('One sigma along track is 0.5 km at the epoch and grows by 1.23 km a day: learned from 28 pairs of its sets.')
    expect(ageingSource(accuracy)).toBe('learned from 28 pairs of its sets')
  })

  it('say that the prior counts too where pairs are few, and how they come where there are none', () => {
    expect(ageingSentence({ ...accuracy, pairs: 1 })).toMatch(/learned from one pair of its sets\. Until there are 10 pairs the prior counts for the rest\.$/)
    expect(ageingSentence({ ...accuracy, source: 'prior', pairs: 0 })).toMatch(/: the prior in the settings\. A second set within 14 days begins to replace it\.$/)
  })

  it('say of what is stated that it is, and what the sets show beside it', () => {
    expect(ageingSentence({ ...accuracy, source: 'stated' })).toMatch(/: stated on the spacecraft\. Its sets show the rings \(28 pairs\)\.$/)
    expect(ageingSentence({ ...accuracy, source: 'stated', pairs: 0 })).toMatch(/: stated on the spacecraft\.$/)
  })
})
