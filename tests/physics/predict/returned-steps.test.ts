import { describe, expect, it } from 'vitest'
import { siteStateTeme } from '../../../shared/physics/orbit/frames'
import { checkCurveOf, directOffsetHz } from '../../../shared/physics/plan/check-curve'
import { echoesOf } from '../../../shared/physics/plan/check-echo'
import { checkTable } from '../../../shared/physics/plan/check-table'
import { worstReturnedHz } from '../../../shared/physics/predict/build-table'
import type { LinkModel, RetuneRow, Turnaround, UplinkInUse, UtcMs } from '../../../shared/physics/types'
import { dayOf, highest, smallBudget, steppedRadio, tableOf, uhfLink } from '../../support/tables'

const day = dayOf('SSO500', 'S42')
const pass = highest(day.passes)
const certain = { ...smallBudget, clockErrorMs: 0, ut1BoundS: 0, alongTrackSigmaS: () => 0, spacecraftPpm: 0, stationPpm: 0 }
const radio = { ...steppedRadio, latencyUncertaintyMs: 0 }
const query = { ...day, linkMinElevationRad: 0, radio, budget: certain, pass }
const turnaround: Turnaround = { numerator: 240, denominator: 221, uplinkPrecompensated: true, uplinkHz: null }
const up: LinkModel = { ...uhfLink, direction: 'uplink', carrierHz: 2106.40625e6, symbolRateHz: 20_000 }
const down: LinkModel = { ...uhfLink, carrierHz: 2287.5e6, symbolRateHz: 60_000, turnaround }

const uplinkTable = tableOf({ ...query, link: up })
const uplink: UplinkInUse = { carrierHz: up.carrierHz, radio, parts: uplinkTable.parts, retunes: uplinkTable.check.retunes }
const downTable = tableOf({ ...query, link: down })
const [part] = downTable.parts
const check = (changes: Partial<{ link: LinkModel, uplink: UplinkInUse | null, rows: readonly RetuneRow[] }> = {}) =>
  checkTable({ ...query, link: down, parts: downTable.parts, rows: downTable.rows, uplink, ...changes })
const echoes = (given: UplinkInUse | null = uplink, link: LinkModel = down) => {
  const curve = checkCurveOf({ ...query, link, ut1MinusUtcS: 0, span: part! })
  return echoesOf({ ...query, link, ut1MinusUtcS: 0, uplink: given }, curve)!
}

/** Instant of transmission of what is received at `utcMs`, twice the range at reception before it (mechanics; 0.1 µs off). */
function sentMs(utcMs: UtcMs): UtcMs {
  const state = day.propagator.at(utcMs)
  if (!state.ok) throw new Error(state.error)
  const station = siteStateTeme(day.site, utcMs, 0).positionM
  return utcMs - 2000 * Math.hypot(...state.positionM.map((x, k) => x - station[k]!)) / 299_792_458
}

/** What the uplink's rows, set minus needed, come back as at an instant of reception: direct propagation and arithmetic alone. */
function expectedHz(utcMs: UtcMs): number {
  const at = sentMs(utcMs)
  const row = uplinkTable.rows.findLast(({ atMs }) => atMs + radio.latencyMs <= at)!
  const neededHz = up.carrierHz + directOffsetHz({ propagator: day.propagator, site: day.site, link: { direction: 'uplink', carrierHz: up.carrierHz }, ut1MinusUtcS: 0 }, at)
  return (row.frequencyHz - neededHz) * 240 / 221
}

describe('the steps of a pre-compensated uplink', () => {
  it('come back a round trip later, times 240/221, as direct propagation has them', () => {
    let asked = 0
    for (const { fromMs, toMs, steps } of echoes()) {
      for (let at = fromMs + 1; at < toMs - 1 && steps; at += 777.7) {
        expect(Math.abs(steps.hz(at) - expectedHz(at))).toBeLessThan(0.5)
        // Chords over 20 ms: what is left of a third of the third difference is nothing here.
        const inside = at - 10 > fromMs && at + 10 < toMs
        if (inside) expect(Math.abs(steps.hzPerS(at) - (steps.hz(at + 10) - steps.hz(at - 10)) / 0.02)).toBeLessThan(0.5)
        asked++
      }
    }
    expect(asked).toBeGreaterThan(500)
    expect(uplinkTable.rows.length).toBeGreaterThan(5)
  })

  it('cover the part without a hole, row after row', () => {
    const all = echoes()
    expect(all[0]!.fromMs).toBe(part!.fromMs)
    expect(all.at(-1)!.toMs).toBe(part!.toMs)
    all.slice(1).forEach((echo, i) => expect(echo.fromMs).toBe(all[i]!.toMs))
    // There and back at 5° of elevation and 500 km: 2·(√((R+h)² − R²·cos²5°) − R·sin 5°)/c = 2·2078 km/c = 13.9 ms (mechanics), give or take the Earth's shape.
    expect(all[0]!.steps).toBeNull()
    expect(all[0]!.toMs - all[0]!.fromMs).toBeGreaterThan(13)
    expect(all[0]!.toMs - all[0]!.fromMs).toBeLessThan(15)
  })

  it('count among the steps of the downlink, both sides of where a row of the uplink begins to come back', () => {
    const without = check({ uplink: null })
    const withSteps = check()
    // By direct propagation at every 20 ms: nothing of it is larger than what the checker says, and it comes close.
    let worst = 0
    for (let at = part!.fromMs + 20; at < part!.toMs; at += 20) {
      const row = downTable.rows.findLast(({ atMs }) => atMs + radio.latencyMs <= at)!
      const neededHz = down.carrierHz + directOffsetHz({ propagator: day.propagator, site: day.site, link: { direction: 'downlink', carrierHz: down.carrierHz }, ut1MinusUtcS: 0 }, at)
      worst = Math.max(worst, Math.abs(neededHz + expectedHz(at) - row.frequencyHz))
    }
    expect(withSteps.worstResidualHz).toBeGreaterThan(worst - 0.5)
    // 20 ms of two legs at most: 2 · 834 Hz/s at 2287.5 MHz (peak rate of the closed form, 802 at 2200).
    expect(withSteps.worstResidualHz).toBeLessThan(worst + 0.02 * 2 * 834)
    expect(withSteps.worstResidualHz).toBeGreaterThan(without.worstResidualHz + 500)
    expect(Math.abs(withSteps.budget.stepsHz)).toBeCloseTo(withSteps.worstResidualHz, 6)
  })

  it('are left room for by a plan that knows of them: it holds when checked, as the one that does not know cannot', () => {
    const tight = { ...down, symbolRateHz: 40_000 }
    const blind = tableOf({ ...query, link: tight })
    const knowing = tableOf({ ...query, link: tight, uplink })
    expect(blind.check.verdict).toBe('holds')
    expect(check({ link: tight, rows: blind.rows }).verdict).not.toBe('holds')
    expect(knowing).toMatchObject({ kappa: 0.8, check: { verdict: 'holds', faults: [], excess: [] } })
    expect(knowing.rows.length).toBeGreaterThan(blind.rows.length)
    // The plan's bound: the worst row of the uplink by 240/221 (arithmetic).
    const worstUp = Math.max(...uplink.retunes.flatMap(row => [-row.residualMinHz, row.residualMaxHz]))
    expect(worstReturnedHz(tight, uplink)).toBeCloseTo(worstUp * 240 / 221, 9)
  })

  it('are nothing where the uplink is not pre-compensated, is not known, or the link is not coherent', () => {
    for (const link of [{ ...down, turnaround: { ...turnaround, uplinkPrecompensated: false } }, { ...down, turnaround: null }]) {
      expect(check({ link })).toEqual(check({ link, uplink: null }))
      expect(worstReturnedHz(link, uplink)).toBe(0)
      expect(echoes(uplink, link)).toBeNull()
    }
    expect(check({ uplink: null }).worstResidualHz).toBe(downTable.check.worstResidualHz)
    expect(worstReturnedHz(down, null)).toBe(0)
  })

  it('come back only of what is sent while the uplink is workable', () => {
    const middle = (part!.fromMs + part!.toMs) / 2
    const all = echoes({ ...uplink, parts: [{ fromMs: middle - 60_000, toMs: middle + 60_000 }] })
    const heard = all.filter(echo => echo.steps)
    expect(sentMs(heard[0]!.fromMs)).toBeCloseTo(middle - 60_000, 1)
    expect(sentMs(heard.at(-1)!.toMs)).toBeCloseTo(middle + 60_000, 1)
    expect([all[0]!.steps, all.at(-1)!.steps]).toEqual([null, null])
  })
})
