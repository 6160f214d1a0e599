import { describe, expect, it } from 'vitest'
import { referenceDoppler } from '../../support/reference-data'
import { oneWayReference, twoWayReference } from '../../support/two-way-reference'
import { bench } from './support'

const carrierHz = 2245e6
const turnaround = { numerator: 240, denominator: 221 }

describe('a coherent link on the bench', () => {
  const pass = referenceDoppler().passes[0]!
  const startMs = Date.parse(pass.windowStart) + pass.startS * 1000
  const { latitudeDeg, longitudeDeg, heightM } = pass.station
  const ask = async (link: object, budget?: object) => {
    const { passes } = await bench({
      elements: { text: `${pass.line1}\n${pass.line2}` }, station: { latitudeDeg, longitudeDeg, heightM, minElevationDeg: 0 },
      from: new Date(startMs).toISOString(), to: new Date(startMs + (pass.lightTimeDownS.length - 1) * pass.stepS * 1000).toISOString(),
      link: { carrierHz, symbolRateHz: 100_000, ...link }, ...(budget ? { budget } : {}), sampleIntervalS: 10,
    } as Parameters<typeof bench>[0])
    return passes
  }

  it.each([
    ['both legs', { ...turnaround }, twoWayReference(pass, carrierHz)],
    ['one leg where its uplink is pre-compensated', { ...turnaround, uplinkPrecompensated: true }, oneWayReference(pass, carrierHz)],
  ] as const)('is planned along what an independent program gives for %s', async (_, given, needed) => {
    // Source: Skyfield with python-sgp4 (data/README.md), leg by leg.
    const passes = await ask({ turnaround: given })
    expect(passes.length).toBeGreaterThan(0)
    for (const { aos, los, table } of passes) {
      // 0.5 dB at 100 kBd: 0.185991 · 100 kHz.
      expect(table!.allowanceHz).toBeCloseTo(18_599.1, 0)
      expect(table).toMatchObject({ verdict: 'holds', faults: [], excess: [] })
      const covered = needed.flatMap((hz, k) => {
        const atMs = startMs + k * pass.stepS * 1000
        return k > 0 && atMs >= Date.parse(aos) && atMs <= Date.parse(los) ? [{ hz, atMs }] : []
      })
      expect(covered.length).toBeGreaterThan(10)
      for (const { hz, atMs } of covered) {
        const row = table!.retunes.findLast(retune => Date.parse(retune.at) + 50 <= atMs)!
        expect(Math.abs(carrierHz + hz - row.frequencyHz)).toBeLessThanOrEqual(0.8 * table!.allowanceHz + 0.5)
      }
    }
  })

  it('is free of the oscillators and answers twice to the orbit, whether or not its uplink is pre-compensated', async () => {
    // Source: mechanics. The same passes one way, with one part of the budget at a time: f·√(1² + 0.5²)·1e-6/√3, and the along-track part.
    const oscillators = { spacecraftPpm: 1, stationPpm: 0.5 }
    const [plain] = await ask({}, oscillators)
    expect(plain!.table!.budget.oscillatorHz).toBeCloseTo(2245 * Math.hypot(1, 0.5) / Math.sqrt(3), 3)
    const [orbitOnly] = await ask({}, { alongTrackSigmaS: 0.2 })
    for (const uplinkPrecompensated of [true, false]) {
      const [coherent] = await ask({ turnaround: { ...turnaround, uplinkPrecompensated } }, oscillators)
      expect(coherent!.table!.budget.oscillatorHz).toBe(0)
      const [twice] = await ask({ turnaround: { ...turnaround, uplinkPrecompensated } }, { alongTrackSigmaS: 0.2 })
      const uncertain = (answer: typeof orbitOnly) => answer!.samples.map(sample => sample.uncertaintyHz)
      const single = uncertain(orbitOnly)
      uncertain(twice).forEach((hz, i) => expect(hz / single[i]!).toBeCloseTo(2, 2))
      // The checker says so, too: at its worst instant, of the curve there.
      const { orbitHz } = twice!.table!.budget
      const at = Date.parse(twice!.table!.worstAt)
      const near = twice!.samples.findIndex(sample => Date.parse(sample.at) >= at)
      const [before, after] = [uncertain(twice)[Math.max(0, near - 1)]! / 2, uncertain(twice)[near]! / 2]
      expect(orbitHz).toBeGreaterThan(0.97 * Math.min(before, after))
      expect(orbitHz).toBeLessThan(1.03 * Math.max(before, after))
    }
  })
})
