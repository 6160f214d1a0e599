import { describe, expect, it } from 'vitest'
import { benchAllowanceBody, benchLossBody } from '#shared/schemas/bench'
import { judgeAllowance, judgeLoss } from '~~/server/domain/bench/judge-link'

const allowance = (link: object) => judgeAllowance(benchAllowanceBody.parse(link))
const loss = (link: object) => judgeLoss(benchLossBody.parse(link))

describe('allowance on the bench', () => {
  // Source: the inverse of 20 log10 sinc, tabulated by hand calculation; coherent is half of it (common practice).
  const inverse = [[0.1, 0.083564], [0.25, 0.131897], [0.5, 0.185991], [1, 0.2615], [2, 0.365466], [3, 0.442243]] as const
  it.each(inverse)('bears %d dB at epsilon %d with a quadrature detector, half of that with a coherent one', (permittedLossDb, epsilon) => {
    const quadrature = allowance({ permittedLossDb, symbolRateHz: 9600 })
    expect(quadrature.epsilon).toBeCloseTo(epsilon, 5)
    expect(quadrature.allowanceHz).toBeCloseTo(epsilon * 9600, 1)
    expect(quadrature).toMatchObject({ symbolTimeS: 1 / 9600, limitedBy: 'loss' })
    expect(allowance({ permittedLossDb, detector: 'coherent' }).epsilon).toBeCloseTo(epsilon / 2, 5)
  })

  it('names what limits it: capture range, filter, the data sheet', () => {
    expect(allowance({ captureRangeHz: 500 })).toMatchObject({ allowanceHz: 500, limitedBy: 'captureRange' })
    // (1 + 0.35)·9600/2 + Δf ≤ 14,000/2.
    expect(allowance({ rolloff: 0.35, filterBandwidthHz: 14_000 })).toMatchObject({ allowanceHz: 520, limitedBy: 'filter' })
    expect(allowance({ detector: 'stated', limitHz: 1200, symbolRateHz: 2400 })).toEqual({ symbolTimeS: 1 / 2400, epsilon: 0.5, allowanceHz: 1200, limitedBy: 'stated' })
  })

  // Sources as in the detectors' own tests: half-sine pulse, exact DBPSK and FSK error rates, Pollet et al. 1995, common practice.
  it.each([
    [{ detector: 'msk', permittedLossDb: 6.0206 }, 0.5, 'loss'],
    [{ detector: 'differential', permittedLossDb: 3.31 }, 0.1, 'loss'],
    [{ detector: 'fsk', permittedLossDb: 0.592 }, 0.1, 'loss'],
    [{ detector: 'multicarrier', permittedLossDb: 0.5424 }, 0.02, 'loss'],
    [{ detector: 'chirp', bandwidthHz: 38_400, spreadingFactor: 7 }, 1, 'stated'],
  ])('bears %o at epsilon %d by its %s', (link, epsilon, limitedBy) => {
    const bears = allowance({ ...link, symbolRateHz: 9600 })
    expect(bears.epsilon).toBeCloseTo(epsilon, 3)
    expect(bears.limitedBy).toBe(limitedBy)
  })

  it('takes Es/N0 and the error rate as given', () => {
    // Ten times the noise a subcarrier may stand is a tenth of the allowance's square (Pollet et al. 1995).
    expect((allowance({ detector: 'multicarrier', permittedLossDb: 0.05, esN0Db: 40 }).epsilon / allowance({ detector: 'multicarrier', permittedLossDb: 0.05, esN0Db: 30 }).epsilon) ** 2).toBeCloseTo(0.1, 2)
    expect(allowance({ detector: 'fsk', errorRate: 1e-9 }).epsilon).toBeLessThan(allowance({ detector: 'fsk' }).epsilon)
  })

  it('refuses a detector without the figures it stands on, detectors that there are not, and fields it does not know', () => {
    const paths = (link: object) => benchAllowanceBody.safeParse(link).error?.issues.map(issue => issue.path.join('.') || issue.code)
    expect(paths({ detector: 'stated' })).toEqual(['limitHz'])
    expect(paths({ detector: 'chirp' })).toEqual(['bandwidthHz', 'spreadingFactor'])
    expect(paths({ detector: 'magic' })).toEqual(['detector'])
    expect(paths({ turnaround: { n: 240, d: 221 } })).toEqual(['turnaround'])
    expect(paths({ symbolRate: 9600 })).toEqual(['unrecognized_keys'])
  })
})

describe('loss on the bench', () => {
  // Source: −20 log10 sinc ε, by hand; 3.922 dB at half a bin is Harris's scalloping loss (1978).
  const curve = [[0.05, 0.036], [0.1, 0.143], [0.2, 0.579], [0.25, 0.912], [0.3, 1.326], [0.4, 2.42], [0.5, 3.922]] as const
  it.each(curve)('at epsilon %d of either sign is %d dB, and that at half the offset for a coherent detector', (epsilon, dB) => {
    for (const sign of [1, -1]) {
      const at = loss({ symbolRateHz: 9600, offsetHz: sign * epsilon * 9600 })
      expect(at.epsilon).toBeCloseTo(sign * epsilon, 9)
      expect(Math.abs(at.lossDb! - dB)).toBeLessThan(0.0006)
      expect(Math.abs(loss({ detector: 'coherent', offsetHz: sign * epsilon * 4800 }).lossDb! - dB)).toBeLessThan(0.0006)
    }
  })

  it('leaves the link’s own error rate at no offset and worsens it with the loss', () => {
    expect(loss({ offsetHz: 0 }).lossDb).toBe(0)
    expect(loss({ offsetHz: 0 }).bitErrorRate!).toBeCloseTo(1e-5, 10)
    // Source: handbook, BPSK: 1e-5 at Eb/N0 9.59 dB and 1e-3 at 6.79 dB. 2.80 dB apart; ε for 2.80 dB by bisection of the sinc: 0.42826.
    expect(loss({ offsetHz: 0.42826 * 9600 }).lossDb!).toBeCloseTo(2.8, 2)
    expect(loss({ offsetHz: 0.42826 * 9600 }).bitErrorRate! / 1e-3).toBeCloseTo(1, 1)
  })

  it('is the degradation of differential and FSK detectors, with the error rate that is left', () => {
    // Exact error rates; ½ is a coin's toss where the phase turns by 90° a symbol.
    expect(loss({ detector: 'differential', offsetHz: 960 }).lossDb).toBeCloseTo(3.31, 2)
    expect(loss({ detector: 'differential', offsetHz: 2400 }).bitErrorRate).toBeCloseTo(0.5, 9)
    expect(loss({ detector: 'fsk', offsetHz: -480 }).lossDb).toBeCloseTo(0.159, 3)
    expect(loss({ detector: 'fsk', offsetHz: 0 }).bitErrorRate! / 1e-5).toBeCloseTo(1, 6)
  })

  it('has a curve but no error rate for many subcarriers, whose modulation is not said', () => {
    const at = loss({ detector: 'multicarrier', offsetHz: 192 })
    expect(at.lossDb).toBeCloseTo(0.542, 3)
    expect(at).not.toHaveProperty('bitErrorRate')
  })

  it('has neither curve nor error rate for a stated detector and a chirp', () => {
    expect(loss({ detector: 'chirp', bandwidthHz: 125_000, spreadingFactor: 7, offsetHz: 480 })).toEqual({ epsilon: 0.05, lossDb: null })
    expect(loss({ detector: 'stated', limitHz: 1000, offsetHz: 480 })).toEqual({ epsilon: 0.05, lossDb: null })
  })
})
