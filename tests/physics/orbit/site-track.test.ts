import { describe, expect, it } from 'vitest'
import { createEphemeris } from '../../../shared/physics/orbit/ephemeris'
import { lookAt, lookOfView } from '../../../shared/physics/orbit/look'
import { createSiteTrack, sinElevation, VIEW_LENGTH } from '../../../shared/physics/orbit/site-track'
import { propagatorOf, referencePasses, verificationCases } from '../../support/reference-data'
import { elementsFromLines, siteFromDegrees } from '../../support/reference-elements'

const DAY = 86_400_000
const { satellites, stations } = referencePasses()
const site = siteFromDegrees(stations[1]!)
const orbits = [
  ...satellites.map(satellite => [satellite.id, satellite.line1, satellite.line2] as const),
  ...verificationCases().filter(c => c.expected_error === null).map(c => [c.satnum, c.line1, c.line2] as const),
]

describe('the track of a spacecraft over a site', () => {
  it.each(orbits)('of %s is where SGP4 itself puts it', (_, line1, line2) => {
    // Source: SGP4 at the same instants, turned to the site by sidereal time there; look angles by `lookAt`, which independent programs hold.
    const elements = elementsFromLines(line1, line2)
    const propagator = propagatorOf(elements)
    const fromMs = Math.ceil(elements.epochUtcUs / 1000) + 7_200_123
    const track = createSiteTrack(createEphemeris(propagator, fromMs, fromMs + 0.5 * DAY), site, 0.3)
    const isLow = elements.meanMotionRevPerDay > 6.4 && elements.eccentricity < 0.2
    const [near, exact] = [new Float64Array(VIEW_LENGTH), new Float64Array(VIEW_LENGTH)]
    let [worstM, worstMps] = [0, 0]
    for (let t = fromMs; t <= fromMs + 0.5 * DAY; t += 23_431.7) {
      expect(track.viewAt(t, near) && track.exactViewAt(t, exact)).toBe(true)
      worstM = Math.max(worstM, Math.hypot(...[0, 1, 2].map(k => near[k]! - exact[k]!)))
      worstMps = Math.max(worstMps, Math.hypot(...[3, 4, 5].map(k => near[k]! - exact[k]!)))
      const state = propagator.at(t)
      if (!state.ok) throw new Error(state.error)
      const look = lookAt(state, site, t, 0.3)
      const own = lookOfView(track, exact)
      expect(Math.abs(own.elevationRad - look.elevationRad)).toBeLessThan(1e-9)
      expect(Math.abs(Math.sin(own.azimuthRad - look.azimuthRad)) * Math.cos(look.elevationRad)).toBeLessThan(1e-9)
      expect(Math.abs(own.rangeM - look.rangeM)).toBeLessThan(0.01)
      expect(Math.abs(own.rangeRateMps - look.rangeRateMps)).toBeLessThan(1e-4)
      expect(Math.abs(sinElevation(exact) - Math.sin(look.elevationRad))).toBeLessThan(1e-9)
    }
    expect(worstM).toBeLessThan(isLow ? 2e-3 : 1e-2)
    expect(worstMps).toBeLessThan(isLow ? 2e-5 : 1e-4)
    expect(worstM + worstMps).toBeGreaterThan(0)
  })

  it('answers on a node, and not outside its ephemeris', () => {
    const [, line1, line2] = orbits[0]!
    const propagator = propagatorOf(elementsFromLines(line1, line2))
    const fromMs = Date.UTC(2026, 11, 1)
    const ephemeris = createEphemeris(propagator, fromMs, fromMs + 600_000, { stepMs: 60_000 })
    const track = createSiteTrack(ephemeris, site, 0)
    const [near, exact] = [new Float64Array(VIEW_LENGTH), new Float64Array(VIEW_LENGTH)]
    for (const t of [fromMs, fromMs + 60_000, ephemeris.fromMs, ephemeris.toMs]) {
      expect(track.viewAt(t, near) && track.exactViewAt(t, exact)).toBe(true)
      near.forEach((value, k) => expect(Math.abs(value - exact[k]!)).toBeLessThan(1e-3))
    }
    expect(track.viewAt(ephemeris.fromMs - 0.01, near)).toBe(false)
    expect(track.viewAt(ephemeris.toMs + 0.01, near)).toBe(false)
  })

  it('belongs to its own site, whichever was asked for before', () => {
    const [, line1, line2] = orbits[0]!
    const fromMs = Date.UTC(2026, 11, 1)
    const ephemeris = createEphemeris(propagatorOf(elementsFromLines(line1, line2)), fromMs, fromMs + 600_000)
    const other = siteFromDegrees(stations[2]!)
    const view = new Float64Array(VIEW_LENGTH)
    for (const [place, ut1] of [[site, 0], [other, 0], [site, 0.4], [site, 0]] as const) {
      createSiteTrack(ephemeris, place, ut1).viewAt(fromMs + 1234, view)
      const look = lookAt(ephemeris.stateAt(fromMs + 1234)!, place, fromMs + 1234, ut1)
      expect(Math.abs(Math.hypot(view[0]!, view[1]!, view[2]!) - look.rangeM)).toBeLessThan(0.01)
    }
  })
})
