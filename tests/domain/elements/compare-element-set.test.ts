import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import type { Deps } from '~~/server/domain/context'
import { compareElementSet } from '~~/server/domain/elements/compare-element-set'
import { useElementSet } from '~~/server/domain/elements/use-element-set'
import type { World } from './support'
import { addLink, addSpacecraft, addStation, openWorld, twoLines, upload } from './support'

let world: World
let deps: Deps
beforeEach(async () => {
  world = await openWorld()
  deps = world.deps
  const spacecraftId = await addSpacecraft(deps)
  await addStation(deps)
  await addLink(deps, spacecraftId)
})
afterEach(() => world.close())

const addSet = async (change: Parameters<typeof twoLines>[0] = {}) => (await upload(deps, twoLines(change))).sets[0]!.id
/** Compares a changed set with the plain one in use. */
async function compareWith(change: Parameters<typeof twoLines>[0], inUse: Parameters<typeof twoLines>[0] = {}) {
  await useElementSet(deps, { id: await addSet(inUse) })
  return compareElementSet(deps, { id: await addSet(change) })
}

describe('shift of prediction', () => {
  it('is the time by which the spacecraft runs ahead, and the hertz that makes', async () => {
    // Source: mechanics. A mean anomaly 0.1° ahead arrives 0.1/360 of a period early: 86400/15.21987654/3600 = 1.577 s; the Earth,
    // turned less by then, changes that by up to a fifteenth.
    const { passes, inUseSetId, warnings } = await compareWith({ anomaly: '272.6678' })
    expect(inUseSetId).not.toBeNull()
    expect(passes.length).toBeGreaterThan(8)
    for (const pass of passes) {
      expect(pass).toMatchObject({ presence: 'both', stationName: 'Invented Hill' })
      expect(Math.abs(pass.culminationShiftS! + 1.577)).toBeLessThan(0.12)
      expect(Math.abs(pass.maxElevationShiftDeg!)).toBeLessThan(0.1)
      // Source: mechanics, f·v²R/((R+h)·h·c) is at most 159.3 Hz/s at 437 MHz and 500 km overhead.
      expect(pass.links[0]!.worstShiftHz).toBeLessThan(160 * 1.577 * 1.07)
      expect(pass.links[0]!.worstShiftHz).toBeGreaterThan(5)
      expect(pass.links[0]!.allowanceHz).toBeCloseTo(0.185991 * 9600, 1)
    }
    expect(Math.max(...passes.map(pass => pass.links[0]!.worstShiftHz))).toBeGreaterThan(100)
    // 12 km at one epoch, where 0.5 km each way is expected.
    expect(warnings).toEqual([{ code: 'along-track-jump', message: expect.stringMatching(/12\.0 km \(1\.5\d s\) ahead/), action: expect.stringContaining('enter the manoeuvre') }])
  })

  it('is the radius times the anomaly along the track over a day, and next to nothing up and across', async () => {
    // Source: mechanics, a·ΔM = 6877.98 km · 0.1° = 12.004 km; a height that breathes with the eccentricity makes it 0.2 % more or less.
    const { difference, jumpSigmas } = await compareWith({ anomaly: '272.6678' })
    expect(difference).toHaveLength(289)
    expect(difference[0]!.at).toBe('2026-11-30T18:00:00.000Z')
    expect(difference.at(-1)!.at).toBe('2026-12-01T18:00:00.000Z')
    for (const { radialM, alongM, crossM } of difference) {
      expect(Math.abs(alongM / 12_004 - 1)).toBeLessThan(0.005)
      expect(Math.hypot(radialM, crossM)).toBeLessThan(60)
    }
    // 12 km over the root of two squares of 0.5 km at one epoch.
    expect(Math.abs(jumpSigmas! - 12_004 / Math.hypot(500, 500))).toBeLessThan(0.1)
  })

  it('is drawn, with each link, where it is worst against its allowance', async () => {
    const { passes, worstByLink, largest, curve } = await compareWith({ anomaly: '272.6678' })
    const worst = passes.toSorted((a, b) => b.links[0]!.worstShiftHz - a.links[0]!.worstShiftHz)[0]!
    expect(worstByLink).toMatchObject([{ linkName: 'Telemetry', stationName: 'Invented Hill', aos: worst.aos, worstShiftHz: worst.links[0]!.worstShiftHz }])
    expect(largest.allowanceShare).toBeCloseTo(worst.links[0]!.worstShiftHz / worst.links[0]!.allowanceHz, 9)
    expect(largest.shiftS).toBeGreaterThan(1.4)
    expect(curve).toMatchObject({ aos: worst.aos, linkName: 'Telemetry' })
    // A downlink falls through its pass (mechanics), by both sets, and they part by no more than the worst.
    const { samples } = curve!
    expect(samples[0]!.oldHz).toBeGreaterThan(5000)
    expect(samples.at(-1)!.newHz).toBeLessThan(-5000)
    const apart = Math.max(...samples.map(sample => Math.abs(sample.newHz - sample.oldHz)))
    expect(apart).toBeLessThanOrEqual(worst.links[0]!.worstShiftHz + 0.01)
    expect(apart).toBeGreaterThan(0.9 * worst.links[0]!.worstShiftHz)
  })

  it('has new passes only where nothing is in use', async () => {
    const { passes, inUseSetId } = await compareElementSet(deps, { id: await addSet() })
    expect(inUseSetId).toBeNull()
    expect(passes.length).toBeGreaterThan(8)
    expect(passes.every(pass => pass.presence === 'new' && pass.aosShiftS === null && pass.links.length === 0)).toBe(true)
  })

  it('pairs no passes of opposite sides of the orbit: they are gone and new', async () => {
    const { passes } = await compareWith({ anomaly: ' 92.5678' })
    expect(passes.filter(pass => pass.presence !== 'both').length).toBeGreaterThan(0)
  })
})

describe('warnings of a comparison', () => {
  const codes = async (change: Parameters<typeof twoLines>[0], inUse?: Parameters<typeof twoLines>[0]) => (await compareWith(change, inUse)).warnings.map(warning => warning.code)

  it('stay away from a set that moves the prediction by what its age explains', async () => {
    // 0.003° of mean anomaly is 0.36 km along the track.
    expect(await codes({ anomaly: '272.5708' })).toEqual([])
  })
  it('name an epoch older than the one in use', async () => {
    expect(await codes({ epoch: '26334.01234567' })).toContain('epoch-older')
  })
  it('name another plane or another height as another object', async () => {
    expect(await codes({ inclination: ' 51.6412' })).toEqual(['other-object'])
  })
  it('name negative drag', async () => {
    expect(await codes({ bstar: '-12345-4' })).toContain('bstar-negative')
  })
  it('name decay within the horizon', async () => {
    const low = { meanMotion: '16.40000000', bstar: ' 50000-3' }
    expect(await codes({ ...low, bstar: ' 50000-2' }, low)).toContain('decays')
  })
})
