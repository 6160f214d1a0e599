import { describe, expect, it } from 'vitest'
import { createEphemeris, gridStepMs } from '../../../shared/physics/orbit/ephemeris'
import { lookAt } from '../../../shared/physics/orbit/look'
import { findPasses, workablePartsForLink } from '../../../shared/physics/orbit/passes'
import type { Site } from '../../../shared/physics/types'
import { clearanceByHand } from '../../support/elevation-by-hand'
import { propagatorOf, referencePasses, verificationCases } from '../../support/reference-data'
import { elementsFromLines, RAD, siteFromDegrees } from '../../support/reference-elements'

const DAY = 86_400_000
const reference = referencePasses()
const satellite = (id: string) => {
  const found = reference.satellites.find(s => s.id === id)!
  const fromMs = Date.parse(found.windowStart)
  const toMs = fromMs + found.windowDays * DAY
  return { fromMs, toMs, ephemeris: createEphemeris(propagatorOf(elementsFromLines(found.line1, found.line2)), fromMs, toMs) }
}
const place = (id: string) => reference.stations.find(station => station.id === id)!
const sso = satellite('SSO500')
const expectedAt = (station: string, minElevationDeg: number) => reference.passes.filter(pass =>
  pass.satellite === 'SSO500' && pass.station === station && pass.minElevationDeg === minElevationDeg)

describe('the pass finder', () => {
  it('finds a pass that peaks 0.01° above the minimum, and none that peaks 0.01° below', () => {
    // Source: the independent program's maximum elevations, given to 1e-6° (data/README.md).
    const found = new Map(reference.satellites.map(s => [s.id, satellite(s.id)] as const))
    let tried = 0
    for (const pass of reference.passes) {
      if (pass.minElevationDeg !== 0 || pass.aosClipped || pass.losClipped) continue
      const { fromMs, ephemeris } = found.get(pass.satellite)!
      const search = (minElevationDeg: number) => findPasses({
        ephemeris,
        site: siteFromDegrees(place(pass.station), minElevationDeg),
        fromMs: fromMs + pass.aosS * 1000 - 1000,
        toMs: fromMs + pass.losS * 1000 + 1000,
        ut1MinusUtcS: 0,
      }).passes
      if (pass.maxElevationDeg > 0.01) {
        const grazing = search(pass.maxElevationDeg - 0.01)
        expect(grazing.some(own => Math.abs(own.culminationMs - fromMs - pass.culminationS * 1000) < 2000)).toBe(true)
      }
      expect(search(pass.maxElevationDeg + 0.01)).toEqual([])
      tried++
    }
    expect(tried).toBeGreaterThan(300)
  })

  it('cuts a pass at the window\'s edges, says so, and takes the highest elevation inside', () => {
    const site = siteFromDegrees(place('N78'))
    const whole = expectedAt('N78', 0)[0]!
    const at = (seconds: number) => sso.fromMs + seconds * 1000
    const after = findPasses({ ...sso, site, fromMs: at(whole.culminationS + 60), toMs: at(whole.losS + 60), ut1MinusUtcS: 0 }).passes
    expect(after).toHaveLength(1)
    expect(after[0]).toMatchObject({ aosClipped: true, losClipped: false, aosMs: at(whole.culminationS + 60), culminationMs: at(whole.culminationS + 60) })
    expect(Math.abs(after[0]!.losMs - at(whole.losS))).toBeLessThan(2)
    const before = findPasses({ ...sso, site, fromMs: at(whole.aosS - 60), toMs: at(whole.culminationS - 60), ut1MinusUtcS: 0 }).passes
    expect(before[0]).toMatchObject({ aosClipped: false, losClipped: true, losMs: at(whole.culminationS - 60), culminationMs: at(whole.culminationS - 60) })
    const inside = findPasses({ ...sso, site, fromMs: at(whole.culminationS - 30), toMs: at(whole.culminationS + 30), ut1MinusUtcS: 0 })
    expect(inside.passes[0]).toMatchObject({ aosClipped: true, losClipped: true })
    expect(inside.passes[0]!.maxElevationRad / RAD).toBeCloseTo(whole.maxElevationDeg, 4)
  })

  it('has one pass, clipped at both ends, for a spacecraft that never sets, and none for one that never rises', () => {
    const geo = satellite('GEO')
    const site = siteFromDegrees(place('EQ0'), 5)
    const { passes, alwaysVisible } = findPasses({ ...geo, site, ut1MinusUtcS: 0 })
    expect(passes).toHaveLength(1)
    expect(alwaysVisible).toBe(true)
    expect(passes[0]).toMatchObject({ aosMs: geo.fromMs, losMs: geo.toMs, aosClipped: true, losClipped: true })
    const never = findPasses({ ...geo, site: siteFromDegrees(place('HI25')), ut1MinusUtcS: 0 })
    expect(never).toMatchObject({ passes: [], alwaysVisible: false, endedBy: null, validUntilMs: geo.toMs })
  })

  it('splits a pass by its mask into workable parts and drops arcs that never clear it', () => {
    // A wall of 60° between azimuths 0° and 10°, crossed by low passes in the north; source: brute force at 100 ms.
    const mask = [[359.99, 0], [0, 60], [10, 60], [10.01, 0]] as const
    const site = siteFromDegrees(place('N78'), 0, mask)
    const own = findPasses({ ...sso, site, ut1MinusUtcS: 0 }).passes
    const split = own.find(pass => pass.workable.length === 2)!
    expect(split.aosMs).toBe(split.workable[0]!.fromMs)
    expect(split.losMs).toBe(split.workable[1]!.toMs)
    for (let t = split.aosMs + 50; t < split.losMs; t += 100) {
      const isIn = split.workable.some(part => part.fromMs <= t && t <= part.toMs)
      expect(isIn, `at ${t - split.aosMs} ms after AOS`).toBe(clearanceByHand(sso.ephemeris.propagator, site, t, 0) > 0)
    }
    const walled = findPasses({ ...sso, site: siteFromDegrees(place('N78'), 0, [[0, 89.9]]), ut1MinusUtcS: 0 })
    expect(walled.passes).toEqual([])
  })

  it('finds a slit in the mask that a pass crosses in a blink', () => {
    // A wall of 89° all round but for a tenth of a degree where the independent program has a pass culminate.
    const passes = expectedAt('N78', 0).slice(0, 12)
    for (const pass of passes) {
      const culminationMs = sso.fromMs + pass.culminationS * 1000
      const state = sso.ephemeris.propagator.at(culminationMs)
      if (!state.ok) throw new Error(state.error)
      const slitDeg = lookAt(state, siteFromDegrees(place('N78')), culminationMs, 0).azimuthRad / RAD
      const mask = [[-0.05, 89], [-0.0499, 0], [0.0499, 0], [0.05, 89]].map(([offset, height]) => [slitDeg + offset!, height!] as const)
      const site = siteFromDegrees(place('N78'), 0, mask)
      const own = findPasses({ ...sso, site, fromMs: culminationMs - 600_000, toMs: culminationMs + 600_000, ut1MinusUtcS: 0 }).passes
      expect(own).toHaveLength(1)
      expect(own[0]!.aosMs).toBeLessThan(culminationMs)
      expect(own[0]!.losMs).toBeGreaterThan(culminationMs)
      expect(own[0]!.losMs - own[0]!.aosMs).toBeLessThan(2000)
    }
  })

  it('narrows the workable parts by a link\'s own minimum elevation, as the independent program\'s passes above it', () => {
    const passes = findPasses({ ...sso, site: siteFromDegrees(place('HI25')), ut1MinusUtcS: 0 }).passes
    const site = siteFromDegrees(place('HI25'))
    const parts = passes.flatMap(pass => workablePartsForLink(pass, sso.ephemeris, site, 10 * RAD, 0))
    const expected = expectedAt('HI25', 10)
    expect(parts).toHaveLength(expected.length)
    parts.forEach((part, i) => {
      expect(Math.abs(part.fromMs - sso.fromMs - expected[i]!.aosS * 1000)).toBeLessThan(2)
      expect(Math.abs(part.toMs - sso.fromMs - expected[i]!.losS * 1000)).toBeLessThan(2)
    })
    expect(workablePartsForLink(passes[0]!, sso.ephemeris, site, -1, 0)).toEqual(passes[0]!.workable)
  })

  it('parts two passes that a dip of two minutes divides, shorter than its own step', () => {
    // Source: every 5 s of the curve itself. A synchronous orbit's elevation has a flat minimum twelve hours from its
    // maximum, which the reference puts at 23222 s.
    const geo = satellite('GEO')
    const site = siteFromDegrees(place('EQ0'))
    const elevation = (t: number): number => {
      const state = geo.ephemeris.propagator.at(t)
      if (!state.ok) throw new Error(state.error)
      return lookAt(state, site, t, 0).elevationRad
    }
    const around = Array.from({ length: 4000 }, (_, i) => geo.fromMs + 23_222_000 + 43_080_000 + (i - 2000) * 5000)
    const lowest = around.reduce((best, t) => elevation(t) < elevation(best) ? t : best)
    const minElevationRad = Math.max(elevation(lowest - 60_000), elevation(lowest + 60_000))
    const { passes } = findPasses({ ...geo, site, fromMs: lowest - 20_000_000, toMs: lowest + 20_000_000, minElevationRad, ut1MinusUtcS: 0 })
    expect(passes).toHaveLength(2)
    const gap = passes[1]!.aosMs - passes[0]!.losMs
    expect(gap).toBeGreaterThan(110_000)
    expect(gap).toBeLessThan(160_000)
    expect(lowest).toBeGreaterThan(passes[0]!.losMs)
    expect(lowest).toBeLessThan(passes[1]!.aosMs)
  })

  it('finds a pass that peaks midway in the first or the last step of its window, with the edges as low on either side', () => {
    const stepMs = gridStepMs(sso.ephemeris.propagator.elements)
    let tried = 0
    for (const pass of reference.passes.filter(({ satellite, minElevationDeg, maxElevationDeg }) => satellite === 'SSO500' && minElevationDeg === 0 && maxElevationDeg > 1)) {
      const peakMs = sso.fromMs + pass.culminationS * 1000
      const site = siteFromDegrees(place(pass.station), pass.maxElevationDeg - 0.01)
      const aside = peakMs % stepMs / stepMs
      // The grid's nodes are whole steps. The window's edge lies as far from the peak as the node on its other side, a moment less, so that it is the higher one.
      const edgeMs = 2 * peakMs - (aside > 0.5 ? Math.ceil(peakMs / stepMs) : Math.floor(peakMs / stepMs)) * stepMs
      const window = aside > 0.5 ? { fromMs: edgeMs + 200, toMs: edgeMs + 30 * stepMs } : { fromMs: edgeMs - 30 * stepMs, toMs: edgeMs - 200 }
      if (Math.abs(edgeMs - peakMs) < 10_000 || window.fromMs < sso.fromMs || window.toMs > sso.toMs) continue
      const found = findPasses({ ...sso, site, ...window, ut1MinusUtcS: 0 }).passes
      expect(found.some(own => Math.abs(own.culminationMs - peakMs) < 2000), `${pass.station}, ${pass.culminationS} s`).toBe(true)
      tried++
    }
    expect(tried).toBeGreaterThan(20)
  })

  it('takes the larger of two minimum elevations', () => {
    const site = siteFromDegrees(place('HI25'), 5)
    expect(findPasses({ ...sso, site, ut1MinusUtcS: 0, minElevationRad: 10 * RAD }).passes).toHaveLength(expectedAt('HI25', 10).length)
    expect(findPasses({ ...sso, site, ut1MinusUtcS: 0, minElevationRad: 0 }).passes).toHaveLength(expectedAt('HI25', 5).length)
  })

  it('moves AOS at a station in the orbit\'s plane by what UT1 turns the Earth', () => {
    const eq = satellite('EQLEO')
    const site = siteFromDegrees(place('EQ0'))
    const [a, b] = [0, 0.43].map(ut1MinusUtcS => findPasses({ ...eq, site, ut1MinusUtcS }).passes[3]!.aosMs) as [number, number]
    // Source: plain mechanics. The Earth is turned 0.43 s further; the spacecraft makes that up at n − ω.
    const turn = 7.292115e-5 / (14.89012345 * 2 * Math.PI / 86_400 - 7.292115e-5)
    expect((b - a) / 430).toBeCloseTo(turn, 2)
  })
})

describe('the end of an element set', () => {
  it('ends the search with its name, and cuts the pass that is up', () => {
    // AIAA 2006-6753, case 28872: good at 50 minutes, decayed at 55. The station lies below it at 50 minutes.
    const { line1, line2 } = verificationCases().find(c => c.satnum === '28872')!
    const elements = elementsFromLines(line1, line2)
    const propagator = propagatorOf(elements)
    const epochMs = elements.epochUtcUs / 1000
    const last = propagator.atMinutes(50)
    if (!last.ok) throw new Error(last.error)
    const ephemeris = createEphemeris(propagator, epochMs, epochMs + DAY)
    const beneath: Site = (() => {
      const [x, y, z] = last.positionM
      const site = { latitudeRad: Math.atan2(z, Math.hypot(x, y)), longitudeRad: 0, heightM: 0, minElevationRad: 0, mask: [] }
      const atMs = epochMs + 50 * 60_000
      let [bestDeg, best] = [0, -2]
      for (let degrees = 0; degrees < 360; degrees++) {
        const elevation = lookAt(last, { ...site, longitudeRad: degrees * RAD }, atMs, 0).elevationRad
        if (elevation > best) [bestDeg, best] = [degrees, elevation]
      }
      return { ...site, longitudeRad: bestDeg * RAD }
    })()
    const search = findPasses({ ephemeris, site: beneath, fromMs: epochMs, toMs: epochMs + DAY, ut1MinusUtcS: 0 })
    expect(search.endedBy).toBe('decayed')
    expect((search.validUntilMs - epochMs) / 60_000).toBeGreaterThan(50)
    expect((search.validUntilMs - epochMs) / 60_000).toBeLessThan(55)
    const pass = search.passes.at(-1)!
    expect(pass.losMs).toBeLessThanOrEqual(search.validUntilMs)
    expect(pass.losClipped).toBe(pass.losMs === search.validUntilMs)
    const afterwards = findPasses({ ephemeris, site: beneath, fromMs: epochMs + DAY / 2, toMs: epochMs + DAY, ut1MinusUtcS: 0 })
    expect(afterwards).toMatchObject({ passes: [], endedBy: 'decayed', validUntilMs: epochMs + DAY / 2 })
  })

  it('is not mistaken for the window\'s', () => {
    expect(findPasses({ ...sso, site: siteFromDegrees(place('N78')), ut1MinusUtcS: 0 })).toMatchObject({ endedBy: null, validUntilMs: sso.toMs })
  })
})
