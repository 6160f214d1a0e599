import { createNeededFrequency } from '../physics/doppler/needed'
import { siteStateTeme } from '../physics/orbit/frames'
import { lookAt } from '../physics/orbit/look'
import { planRetunes } from '../physics/plan/plan-retunes'
import { circular, EARTH_RATE, invented500, meanMotion, overhead, propagatorFor, R_M, RADIUS_500_M, siteOnSphere, T0, TILT } from './examples'

const C = 299_792_458

/**
 * Furthest that −ρ̇/c strays from the closed form of a circular orbit through a pass that peaks near `peakDeg`, per cent of its largest:
 * −(1/c)·R·r·sin ψ·g·ω_F/√(R² + r² − 2Rr cos ψ·g), ψ = ω_F·(t − t0), ω_F = n − ω cos i, g = cos(acos((R/r)·cos θ) − θ), θ the peak.
 */
export function closedFormDeviationPercent(peakDeg: number): number {
  const site = siteOnSphere(0, 0.4)
  const ratio = R_M / RADIUS_500_M
  const aside = Math.acos(ratio * Math.cos(peakDeg * Math.PI / 180)) - peakDeg * Math.PI / 180
  const [x, y] = siteStateTeme(site, T0, 0).positionM
  const stateAt = circular(TILT, Math.atan2(y, x) + aside / Math.sin(TILT), 0)
  const look = (utcMs: number) => lookAt(stateAt(utcMs), site, utcMs, 0)
  let peakMs = T0
  for (const step of [5000, 200]) {
    const middle = peakMs
    for (let k = -25; k <= 25; k++) if (look(middle + k * step).elevationRad > look(peakMs).elevationRad) peakMs = middle + k * step
  }
  const peak = look(peakMs).elevationRad
  const g = Math.cos(Math.acos(ratio * Math.cos(peak)) - peak)
  const turning = meanMotion(RADIUS_500_M) - EARTH_RATE * Math.cos(TILT)
  let [furthest, largest] = [0, 0]
  for (let t = peakMs - 350_000; t <= peakMs + 350_000; t += 10_000) {
    const seen = look(t)
    if (seen.elevationRad <= 0) continue
    const angle = turning * (t - peakMs) / 1000
    const closed = -R_M * RADIUS_500_M * Math.sin(angle) * g * turning / C / Math.sqrt(R_M ** 2 + RADIUS_500_M ** 2 - 2 * R_M * RADIUS_500_M * Math.cos(angle) * g)
    furthest = Math.max(furthest, Math.abs(-seen.rangeRateMps / C - closed))
    largest = Math.max(largest, Math.abs(closed))
  }
  return 100 * furthest / largest
}

/** Rows for a needed frequency that falls evenly for a minute, and how far it is from them at most, per cent of the allowance of 1000 Hz. */
export function planOf(fallHzPerS: number): { readonly rows: number, readonly furthestPercent: number } {
  const frequencyHz = (utcMs: number) => 437e6 - fallHzPerS * (utcMs - T0) / 1000
  const { rows } = planRetunes({
    needed: { frequencyHz }, uncertaintyHz: () => 0, allowanceHz: 1000, parts: [{ fromMs: T0, toMs: T0 + 60_000 }],
    radio: { stepHz: 1, offsetHz: 0, minDwellS: 1, latencyMs: 0, latencyUncertaintyMs: 0 }, jumpLimitHz: null, bandLowHz: null, bandHighHz: null,
  })
  const missHz = rows.flatMap((row, i) => [Math.max(row.effectMs, T0), rows[i + 1]?.effectMs ?? T0 + 60_000].map(t => Math.abs(frequencyHz(t) - row.frequencyHz)))
  return { rows: rows.length, furthestPercent: Math.max(...missHz) / 10 }
}

/** Furthest that a setting a second is off within half a minute of culmination, Hz; with `atStart` 1 what the start of each span would leave. */
export function cadenceMissHz(atStart: number): number {
  const needed = createNeededFrequency({ ...overhead(), direction: 'downlink', carrierHz: 437e6 })
  const { rows } = planRetunes({
    needed, uncertaintyHz: () => 0, allowanceHz: 200, parts: [{ fromMs: T0 - 30_500, toMs: T0 + 30_500 }],
    radio: { stepHz: 0.1, offsetHz: 0, minDwellS: 1, latencyMs: 0, latencyUncertaintyMs: 0, cadenceS: 1 }, jumpLimitHz: null, bandLowHz: null, bandHighHz: null,
  })
  return Math.max(...rows.flatMap(({ effectMs, frequencyHz }) => {
    const setHz = atStart ? needed.frequencyHz(effectMs) : frequencyHz
    return [effectMs, effectMs + 1000].map(t => Math.abs(needed.frequencyHz(t) - setHz))
  }))
}

/**
 * What a burn of 1 cm/s along the track does to a circular orbit at 500 km, by SGP4: 0 its mean height over ten orbits, m; 1 how far it
 * is behind after a day, km.
 */
export function burnt(which: number): number {
  const axisM = RADIUS_500_M
  const speedMps = axisM * meanMotion(axisM)
  const orbit = (gainMps: number) => {
    const meanMotionRevPerDay = meanMotion(axisM) * (1 - 3 * gainMps / speedMps) * 86_400 / (2 * Math.PI)
    const propagator = propagatorFor({ ...invented500, eccentricity: 1e-4, bstar: 0, meanMotionRevPerDay })
    return (minutes: number) => {
      const state = propagator.atMinutes(minutes)
      if (!state.ok) throw new Error(state.error)
      return state
    }
  }
  const [before, after] = [orbit(0), orbit(0.01)]
  if (which === 1) {
    const [there, late] = [before(1440), after(1440)]
    const [gap, speed] = [there.positionM.map((value, i) => value - late.positionM[i]!), there.velocityMps]
    return gap.reduce((sum, value, i) => sum + value * speed[i]!, 0) / Math.hypot(...speed) / 1000
  }
  const meanRadius = (state: typeof before): number => {
    const minutes = Array.from({ length: 1000 }, (_, i) => i * 10 * 2 * Math.PI / meanMotion(axisM) / 60 / 1000)
    return minutes.reduce((sum, at) => sum + Math.hypot(...state(at).positionM), 0) / 1000
  }
  return meanRadius(after) - meanRadius(before)
}
