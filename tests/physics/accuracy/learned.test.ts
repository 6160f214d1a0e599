import { describe, expect, it } from 'vitest'
import { fitGrowth } from '../../../shared/physics/accuracy/fit-growth'
import { learnAccuracy } from '../../../shared/physics/accuracy/learned'
import { agedErrors } from '../../../shared/physics/accuracy/pairs'
import type { MeanElements } from '../../../shared/physics/types'
import { normalErrors, setAt } from '../../support/set-history'

// Source of the method: Osweiler 2006 (pairwise differencing). Histories of known error: each set is the true orbit's,
// moved along track by a stated time at its epoch and gaining a stated time a day; what comes back is held against that.
const SPEED_KMPS = 7.616 // √(GM/a) at 15.2 rev/day, mechanics
const prior = { floorKm: 0.01, growthKmPerDay: 1.5 }
const daily = (count: number, error: (i: number) => { aheadS?: number, gainSPerDay?: number }): MeanElements[] =>
  Array.from({ length: count }, (_, i) => setAt(i, error(i)))
const spanOfDays = (from: number, to: number) => {
  const startMs = setAt(0).epochUtcUs / 1000
  return { fromMs: startMs + from * 86_400_000, toMs: startMs + to * 86_400_000 }
}
const nearly = (value: number, expected: number, share: number): void => expect(Math.abs(value / expected - 1), `${value} for ${expected}`).toBeLessThan(share)

describe('accuracy learned from pairs of sets', () => {
  it('finds the timing error that one set was given, with its sign and its age', () => {
    const [error, ...others] = agedErrors([setAt(3), setAt(0, { aheadS: 0.25, gainSPerDay: 0.1 })])
    expect(others).toEqual([])
    expect(error!.ageDays).toBeCloseTo(3, 9)
    // 0.25 s + 3 days of 0.1 s
    expect(error!.timingS).toBeCloseTo(0.55, 3)
  })

  it('recovers a growth alone to 10 %', () => {
    const errors = normalErrors(60, 1)
    const learned = learnAccuracy(daily(60, i => ({ gainSPerDay: 0.3 * errors[i]! })), prior)
    expect(learned.source).toBe('learned')
    nearly(learned.growthKmPerDay, 0.3 * SPEED_KMPS, 0.1)
    expect(learned.floorKm).toBeLessThan(0.1)
  })

  it('recovers a floor alone to 10 %: a difference of two errors of 0.1 s has √2 of it', () => {
    const errors = normalErrors(60, 2)
    const learned = learnAccuracy(daily(60, i => ({ aheadS: 0.1 * errors[i]! })), prior)
    nearly(learned.floorKm, Math.SQRT2 * 0.1 * SPEED_KMPS, 0.1)
    expect(learned.growthKmPerDay).toBeLessThan(0.02)
  })

  it('follows floor and growth together to 25 % at every age', () => {
    const [atEpoch, gains] = [normalErrors(100, 3), normalErrors(100, 4)]
    const learned = learnAccuracy(daily(100, i => ({ aheadS: 0.1 * atEpoch[i]!, gainSPerDay: 0.08 * gains[i]! })), prior)
    for (const age of [0.5, 1, 2, 4, 8, 14]) nearly(learned.floorKm + learned.growthKmPerDay * age, Math.hypot(Math.SQRT2 * 0.1, 0.08 * age) * SPEED_KMPS, 0.25)
    for (const bin of learned.bins) nearly(bin.sigmaKm, Math.hypot(Math.SQRT2 * 0.1, 0.08 * bin.ageDays) * SPEED_KMPS, 0.25)
    expect(learned.bins.reduce((sum, bin) => sum + bin.pairs, 0)).toBe(learned.pairs)
  })

  it('is moved by one set in twelve that is somebody else’s by less than 25 %', () => {
    const errors = normalErrors(60, 5)
    const clean = learnAccuracy(daily(60, i => ({ gainSPerDay: 0.2 * errors[i]! })), prior)
    const spoilt = learnAccuracy(daily(60, i => i % 12 === 5 ? { aheadS: 60 } : { gainSPerDay: 0.2 * errors[i]! }), prior)
    for (const age of [3, 7]) nearly(spoilt.floorKm + spoilt.growthKmPerDay * age, clean.floorKm + clean.growthKmPerDay * age, 0.25)
  })

  it('leaves out pairs with a manoeuvre between them, and with no part of one', () => {
    // From day 10 on the orbit runs 30 s ahead: a burn on that day.
    const burnt = daily(14, i => ({ aheadS: i >= 10 ? 30 : 0 }))
    const [from, to] = [burnt[9]!, burnt[10]!].map(set => set.epochUtcUs / 1000) as [number, number]
    const burn = { fromMs: from + 3_600_000, toMs: to - 3_600_000 }
    expect(Math.max(...agedErrors(burnt).map(({ timingS }) => Math.abs(timingS)))).toBeGreaterThan(29)
    const kept = agedErrors(burnt, [burn])
    // Of 91 pairs the 10·4 across it go: 45 before and 6 after are left (combinatorics).
    expect(kept).toHaveLength(51)
    expect(Math.max(...kept.map(({ timingS }) => Math.abs(timingS)))).toBeLessThan(0.01)
    // One that covers an epoch takes every pair of that set as well.
    expect(agedErrors(burnt, [{ fromMs: from - 1000, toMs: to - 1000 }])).toHaveLength(36 + 6)
  })

  it('follows the known error through a burn that is left out, and is spoilt by one that is not', () => {
    // From halfway between days 19 and 20 on the orbit gains 30 s a day: sets before it know nothing of that.
    const errors = normalErrors(40, 8)
    const history = daily(40, i => ({ aheadS: Math.max(0, 30 * (i - 19.5)), gainSPerDay: (i > 19 ? 30 : 0) + 0.2 * errors[i]! }))
    const learned = learnAccuracy(history, prior, [spanOfDays(19.2, 19.8)])
    // 20 sets on either side, ages to 14 days: 2·(6·14 + 13·14/2) pairs (combinatorics)
    expect(learned.pairs).toBe(350)
    nearly(learned.growthKmPerDay, 0.2 * SPEED_KMPS, 0.15)
    const spoilt = learnAccuracy(history, prior)
    expect(spoilt.floorKm + 10 * spoilt.growthKmPerDay).toBeGreaterThan(2 * (learned.floorKm + 10 * learned.growthKmPerDay))
  })

  it('falls back on the prior as manoeuvres thin the pairs out', () => {
    const agreeing = [0, 1, 2, 3, 4, 5].map(day => setAt(day))
    const given = { floorKm: 0.5, growthKmPerDay: 10 }
    // Six sets of one orbit show no growth, so what is left is the prior's share (arithmetic): three pairs beside two burns, one beside four, none beside five.
    const burnsOn = (...days: number[]) => days.map(day => spanOfDays(day + 0.4, day + 0.6))
    expect(learnAccuracy(agreeing, given, burnsOn(1, 3))).toMatchObject({ source: 'learned', pairs: 3, floorKm: 0.5, growthKmPerDay: 7 })
    expect(learnAccuracy(agreeing, given, burnsOn(1, 2, 3, 4))).toMatchObject({ source: 'learned', pairs: 1, floorKm: 0.5, growthKmPerDay: 9 })
    expect(learnAccuracy(agreeing, given, burnsOn(0, 1, 2, 3, 4))).toEqual({ source: 'prior', pairs: 0, bins: [], ...given })
  })

  it('needs the prior\'s growth no longer from ten pairs on', () => {
    const growth = (count: number): number => learnAccuracy(Array.from({ length: count }, (_, day) => setAt(day)), { floorKm: 0.5, growthKmPerDay: 10 }).growthKmPerDay
    // Four sets are six pairs, five are ten: 0.4 · 10, and nothing (arithmetic).
    expect([4, 5].map(growth)).toEqual([4, 0])
  })

  it('is the prior itself without a pair: one set, none, the same set twice, or sets more than 14 days apart', () => {
    for (const sets of [[], [setAt(0)], [setAt(0), setAt(0)], [setAt(0), setAt(14.5)]]) {
      expect(learnAccuracy(sets, prior)).toEqual({ source: 'prior', pairs: 0, bins: [], ...prior })
    }
  })

  it('counts three pairs for three tenths, and the prior for the rest', () => {
    // All agree with one orbit, so the pairs show no growth: 0.3 · 0 + 0.7 · 10 (arithmetic).
    const learned = learnAccuracy([setAt(0), setAt(1), setAt(2)], { floorKm: 0.5, growthKmPerDay: 10 })
    expect(learned).toMatchObject({ source: 'learned', pairs: 3, floorKm: 0.5, growthKmPerDay: 7 })
  })

  it('never promises less than the prior’s floor, since sets that err alike agree', () => {
    const alike = learnAccuracy(daily(30, () => ({ aheadS: 1 })), { floorKm: 0.5004, growthKmPerDay: 1.5 })
    expect(alike.floorKm).toBe(0.5004)
    expect(alike.growthKmPerDay).toBeLessThan(0.01)
    // Where the floor is the prior's, the growth is what is left beside it: at the age that weighs most both lines meet.
    const errors = normalErrors(60, 7)
    const history = daily(60, i => ({ gainSPerDay: 0.3 * errors[i]! }))
    const [free, held] = [prior, { floorKm: 2, growthKmPerDay: 1.5 }].map(given => learnAccuracy(history, given))
    expect(held!.floorKm).toBe(2)
    nearly(held!.floorKm + held!.growthKmPerDay * 9, free!.floorKm + free!.growthKmPerDay * 9, 0.03)
  })

  it('looks at the newest hundred sets, in whatever order they come', () => {
    const errors = normalErrors(130, 6)
    const sets = daily(130, i => ({ gainSPerDay: (i < 30 ? 5 : 0.2) * errors[i]! }))
    const learned = learnAccuracy(sets, prior)
    // 100 sets a day apart, ages to 14 days: 86·14 + 13·14/2 pairs (combinatorics)
    expect(learned.pairs).toBe(1295)
    expect(learnAccuracy([...sets].reverse(), prior)).toEqual(learned)
    nearly(learned.growthKmPerDay, 0.2 * SPEED_KMPS, 0.2)
  })

  it('leaves out sets that SGP4 cannot use', () => {
    const sunk = { ...setAt(1), meanMotionRevPerDay: 18 }
    expect(agedErrors([setAt(0), sunk, setAt(2)])).toHaveLength(1)
  })
})

describe('the line through the spreads', () => {
  it('passes through points that lie on one', () => {
    const bins = [1, 2, 5].map(ageDays => ({ ageDays, sigmaS: 0.2 + 0.3 * ageDays, pairs: 5 }))
    const fit = fitGrowth(bins, 0.1)!
    expect(fit.floorS).toBeCloseTo(0.2, 9)
    expect(fit.growthSPerDay).toBeCloseTo(0.3, 9)
  })

  it('is not led by the small spreads of young sets where drag bends it upwards', () => {
    // Source: worked by hand. Through (1, 0.1) and (10, 5), ten pairs each, floor 0.1: growth (0 + 10·4.9)/(1 + 100).
    const fit = fitGrowth([{ ageDays: 1, sigmaS: 0.1, pairs: 10 }, { ageDays: 10, sigmaS: 5, pairs: 10 }], 0.1)!
    expect(fit.growthSPerDay).toBeCloseTo(49 / 101, 9)
  })

  it('keeps to its bounds: no negative growth, no floor under the least', () => {
    expect(fitGrowth([{ ageDays: 1, sigmaS: 0.5, pairs: 4 }, { ageDays: 5, sigmaS: 0.4, pairs: 4 }], 0.1)!.growthSPerDay).toBe(0)
    const steep = fitGrowth([{ ageDays: 1, sigmaS: 0.2, pairs: 4 }, { ageDays: 5, sigmaS: 2, pairs: 4 }], 0.1)!
    expect(steep.floorS).toBe(0.1)
    // One age alone: all beyond the least floor is growth.
    expect(fitGrowth([{ ageDays: 2, sigmaS: 0.5, pairs: 9 }], 0.1)).toEqual({ floorS: 0.1, growthSPerDay: 0.2 })
    expect(fitGrowth([], 0.1)).toBeNull()
  })
})
