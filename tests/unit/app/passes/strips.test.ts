import { describe, expect, it } from 'vitest'
import { valueAt } from '~/utils/passes/curve'
import { pastEdge, readingAt, residualLines, setLine, spansWithin, stripData } from '~/utils/passes/strips'

// A straight needed curve, worked by hand: +100 Hz at 0 s, −100 Hz at 20 s, −10 Hz/s; carrier 1 MHz.
const base = Date.parse('2026-12-01T03:00:00.000Z')
const iso = (seconds: number) => new Date(base + seconds * 1000).toISOString()
const seconds = [0, 5, 10, 15, 20]
const samples = {
  samples: seconds.map(s => ({ at: iso(s), azimuthDeg: 0, elevationDeg: s, horizonDeg: 5, rangeM: 0, rangeRateMps: 0 })),
  links: [{ linkId: 'a', tableId: null, dopplerHz: seconds.map(s => 100 - 10 * s), dopplerRateHzPerS: seconds.map(() => -10), uncertaintyHz: seconds.map(() => 20) }],
}
const row = { dopplerHz: 0, rangeRateMps: 0, azimuthDeg: 0, elevationDeg: 0, residualMinHz: 0, residualMaxHz: 0, lossDb: 0, slopeHzPerS: 0 }
const table = {
  linkId: 'a', carrierHz: 1_000_000, allowanceHz: 60,
  // Commanded half a second early on a radio that takes half a second.
  retunes: [{ ...row, at: iso(-0.5), frequencyHz: 1_000_050 }, { ...row, at: iso(9.5), frequencyHz: 999_950 }],
  workable: [{ from: iso(2), to: iso(18) }], radio: { latencyMs: 500 },
}
const data = stripData(samples, table)!
const t = (s: number) => base + s * 1000

describe('the strips of a pass', () => {
  it('draw each retune from the instant it takes effect, one latency after its command', () => {
    expect(setLine(data)).toEqual([{ t: t(0), y: 50 }, { t: t(10), y: 50 }, { t: t(10), y: -50 }, { t: t(20), y: -50 }])
  })

  it('let a ramp go on at its slope', () => {
    const ramped = stripData(samples, { ...table, retunes: [{ ...table.retunes[0]!, slopeHzPerS: -10 }] })!
    expect(setLine(ramped)).toEqual([{ t: t(0), y: 50 }, { t: t(20), y: -150 }])
  })

  it('draw a radio behind a converter in the sky, where its dial and its slope come to', () => {
    // By hand: 1.5 MHz − 499 950 Hz is 50 Hz above the carrier, and a rising dial falls there; 0.4 MHz + 600 050 Hz as well.
    const dial = (loHz: number, inverts: boolean, frequencyHz: number, slopeHzPerS: number) => setLine(stripData(samples, {
      ...table, retunes: [{ ...table.retunes[0]!, frequencyHz, slopeHzPerS }], radio: { latencyMs: 500, converter: { loHz, inverts } },
    })!)
    expect(dial(1_500_000, true, 499_950, 10)).toEqual([{ t: t(0), y: 50 }, { t: t(20), y: -150 }])
    expect(dial(400_000, false, 600_050, -10)).toEqual([{ t: t(0), y: 50 }, { t: t(20), y: -150 }])
  })

  it('draw the residual as needed minus set with both sides of a retune, inside the workable part only', () => {
    // At 2 s 80 − 50; at 10 s 0 − 50 and 0 + 50; at 18 s −80 + 50.
    expect(residualLines(data)).toEqual([[
      { t: t(2), y: 30, u: 20 }, { t: t(5), y: 0, u: 20 }, { t: t(10), y: -50, u: 20 }, { t: t(10), y: 50, u: 20 }, { t: t(15), y: 0, u: 20 }, { t: t(18), y: -30, u: 20 },
    ]])
  })

  it('start the residual only where a retune is in force', () => {
    const late = stripData(samples, { ...table, retunes: [table.retunes[1]!] })!
    expect(residualLines(late)[0]!.map(point => point.y)).toEqual([50, 0, -30])
  })

  it('read needed, set, residual, elevation and row at the cursor', () => {
    const reading = readingAt(data, t(12))
    expect(reading).toMatchObject({ setHz: -50, row: 1, workable: true, uncertaintyHz: 20, elevationDeg: 12 })
    expect(reading.neededHz).toBeCloseTo(-20, 9)
    expect(reading.residualHz).toBeCloseTo(30, 9)
    expect(readingAt(data, t(1))).toMatchObject({ residualHz: null, workable: false, setHz: 50 })
  })

  it('say nothing of a link whose curve is missing', () => {
    expect(stripData(samples, { ...table, linkId: 'b' })).toBeNull()
  })
})

describe('what lies past the edge', () => {
  const points = residualLines(data)[0]!

  it('begins and ends where the budgeted residual crosses the allowance', () => {
    // Below: −y + 20 reaches 60 at y = −40, 9 s, and falls back at the retune. Above: 50 + 20 falls to 60 at 11 s.
    expect(pastEdge(points, 60, -1)).toEqual([[{ t: t(9), y: -60 }, { t: t(10), y: -70 }, { t: t(10), y: -60 }]])
    expect(pastEdge(points, 60, 1)).toEqual([[{ t: t(10), y: 60 }, { t: t(10), y: 70 }, { t: t(11), y: 60 }]])
  })

  it('is closed on the edge where the workable part begins or ends past it', () => {
    const areas = pastEdge([{ t: 0, y: 100, u: 0 }, { t: 10, y: 100, u: 0 }], 60, 1)
    expect(areas).toEqual([[{ t: 0, y: 60 }, { t: 0, y: 100 }, { t: 10, y: 100 }, { t: 10, y: 60 }]])
  })

  it('is nothing inside the allowance', () => {
    expect(pastEdge(points, 80, 1)).toEqual([])
    expect(pastEdge(points, 80, -1)).toEqual([])
  })
})

describe('a curve between its samples', () => {
  // The Hermite cubic through values and slopes reproduces every cubic exactly (textbook property).
  it('is exact for a cubic', () => {
    const f = (x: number) => 2 * x ** 3 - x ** 2 + 5 * x - 7
    const rate = (x: number) => 6 * x ** 2 - 2 * x + 5
    const at = [0, 2, 3, 7]
    const curve = { atMs: at.map(x => x * 1000), value: at.map(f), ratePerS: at.map(rate) }
    for (const x of [0, 0.5, 1.9, 2, 2.5, 6.1, 7]) expect(valueAt(curve, x * 1000)).toBeCloseTo(f(x), 9)
  })

  it('holds its end values outside', () => {
    const curve = { atMs: [0, 1000], value: [1, 2], ratePerS: [1, 1] }
    expect(valueAt(curve, -500)).toBe(1)
    expect(valueAt(curve, 5000)).toBe(2)
  })
})

describe('spans in a view', () => {
  it('are cut to it, in order, those that meet joined', () => {
    const spans = [{ fromMs: 50, toMs: 70 }, { fromMs: -20, toMs: 10 }, { fromMs: 10, toMs: 20 }, { fromMs: 60, toMs: 65 }, { fromMs: 90, toMs: 400 }, { fromMs: 200, toMs: 300 }]
    expect(spansWithin(spans, { fromMs: 0, toMs: 100 })).toEqual([{ fromMs: 0, toMs: 20 }, { fromMs: 50, toMs: 70 }, { fromMs: 90, toMs: 100 }])
  })
})
