import { describe, expect, it } from 'vitest'
import { runChecks } from '../../../shared/checks/run-checks'
import type { OutsideValues } from '../../../shared/checks/values'
import { outsideValues, places } from '../../../shared/checks/values'
import { cardTags, readCards } from '../../../shared/formats/formula-cards'
import { sourceFiles } from '../../support/source-files'

// Each value bears its source in shared/checks/values.ts.
const results = runChecks()

describe('the running code, put to values from outside', () => {
  it.each(results.map(result => [result.what, result] as const))('%s', (_, { computed, expected, tolerance, source, failure }) => {
    expect(failure).toBeNull()
    expect(Math.abs(computed! - expected), `${computed} is not ${expected} ± ${tolerance} (${source})`).toBeLessThanOrEqual(tolerance)
  })

  it('is quick enough for a page', () => {
    const began = performance.now()
    runChecks()
    expect(performance.now() - began).toBeLessThan(1000)
  })
})

describe('a check', () => {
  const group: OutsideValues = { id: 'x', place: 'link', card: 'lossDb', what: 'Loss at {at}', unit: 'dB', decimals: 1, tolerance: 0.1, source: 'by hand', values: [[2, 5], [3, 7, 'three']] }
  const check = (compute: (at: number) => number, more: Partial<OutsideValues> = {}) => runChecks([{ ...group, ...more }], { x: compute })

  it('holds within its tolerance and not beyond, either way', () => {
    expect(check(at => at + 3.09).map(result => result.isOk)).toEqual([true, false])
    expect(check(at => 2 * at + 0.95).map(result => result.isOk)).toEqual([true, true])
    expect(check(at => 2 * at + 0.85).map(result => result.isOk)).toEqual([false, false])
  })

  it('may have a share of the value as its tolerance', () => {
    expect(check(() => -5.04, { isShare: true, tolerance: 0.01, values: [[0, -5]] })[0]).toMatchObject({ isOk: true, tolerance: 0.05 })
    expect(check(() => -5.06, { isShare: true, tolerance: 0.01, values: [[0, -5]] })[0]!.isOk).toBe(false)
  })

  it('that gives no number, throws, or is computed by nothing does not hold, and says so', () => {
    expect(check(() => NaN)[0]).toMatchObject({ isOk: false, computed: null, failure: 'It gives no number.' })
    expect(check(() => {
      throw new RangeError('outside')
    })[0]).toMatchObject({ isOk: false, failure: 'outside' })
    expect(runChecks([group], {})[0]).toMatchObject({ isOk: false, failure: 'Nothing computes it.' })
  })

  it('says what it asks, in words where there are some', () => {
    expect(check(() => 5).map(result => result.what)).toEqual(['Loss at 2', 'Loss at three'])
  })
})

describe('values from outside', () => {
  it('have a source each, and a function with a card that they hold', () => {
    const cards = sourceFiles('shared/physics').flatMap(({ path, text }) => readCards(path, text))
    expect(outsideValues.filter(({ source }) => source.length < 5)).toEqual([])
    expect(outsideValues.map(({ card }) => card).filter(name => !cards.some(card => card.name === name && cardTags.every(tag => card[tag] !== '')))).toEqual([])
  })

  it('go by ids of their own, so that each is put to its own computation', () => {
    expect(new Set(outsideValues.map(({ id }) => id)).size).toBe(outsideValues.length)
  })

  it('are there for every place of the page', () => {
    expect(places.filter(place => !results.some(result => result.place === place))).toEqual([])
  })
})
