import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { elementSets } from '~~/server/database/schema'
import { useElementSet } from '~~/server/domain/elements/use-element-set'
import type { World } from './support'
import { addSpacecraft, openWorld, twoLines, upload } from './support'

/*
 * Two invented spacecraft on one orbit, 10° of mean anomaly apart: at a semi-major axis of 6 880 km (n = 15.22 rev/day by
 * Kepler's third law) that is a chord of 2·6 880·sin 5° = 1 199 km. Source: mechanics.
 */
let world: World
let one: string
beforeEach(async () => {
  world = await openWorld()
  one = await addSpacecraft(world.deps, { name: 'Invented One', catalogueNumber: '90001', designator: null })
  await addSpacecraft(world.deps, { name: 'Invented Two', catalogueNumber: '90002', designator: null })
  for (const set of (await upload(world.deps, twoLines({ number: '90001', anomaly: '100.0000' }) + twoLines({ number: '90002', anomaly: '110.0000' }))).sets) await useElementSet(world.deps, { id: set.id })
})
afterEach(() => world.close())

/**
 * Two hours later on the same orbit: 15.21987654 rev/day · 360° / 12 = 456.5963°, less what the perigee turns back by, which
 * the anomaly takes over in so round an orbit: ¾·J2·(R/a)²·n·(5cos²i − 1) = −3.506°/day; the node moves by
 * −1.5·J2·(R/a)²·n·cos i = 0.985°/day. Source: first-order theory of J2 (handbook formulas).
 */
const anomalyLater = (anomaly: number) => ((anomaly + 456.5963 - 0.2922) % 360).toFixed(4).padStart(8)
const later = (number: string, anomaly: number) => twoLines({ number, epoch: '26334.59567900', node: ' 45.2055', anomaly: anomalyLater(anomaly) })
const warnings = async () => (await world.deps.db.select().from(elementSets)).flatMap(set => set.warnings.filter(warning => warning.code === 'fits-another').map(warning => ({ set, message: warning.message })))

describe('a set that fits another spacecraft far better than its own', () => {
  it('is pointed out, with both distances, and stays with the one it was taken for', async () => {
    const report = await upload(world.deps, later('90001', 110))
    expect(report.warnings).toEqual([expect.objectContaining({ code: 'fits-another', line: 1, message: expect.stringMatching(/Invented One.*Invented Two/s) })])
    expect(report.sets[0]!.spacecraftId).toBe(one)
    const [own, other] = [...report.warnings[0]!.message.matchAll(/([\d.]+) km/g)].map(match => Number(match[1]))
    expect(own).toBeGreaterThan(1150)
    expect(own).toBeLessThan(1250)
    expect(other).toBeLessThan(5)
    expect((await warnings()).map(({ set }) => set.spacecraftId)).toEqual([one])
  })

  it('is not claimed of a set that fits its own, nor of one that fits nobody', async () => {
    const report = await upload(world.deps, later('90001', 100) + later('90002', 110) + twoLines({ number: '90001', epoch: '26334.59567900', anomaly: ' 10.0000' }))
    expect(report.warnings.filter(warning => warning.code === 'fits-another')).toEqual([])
  })

  it('is told of a set that was taken for nobody as well, over a revolution and not at one instant', async () => {
    const report = await upload(world.deps, later('70007', 110))
    expect(report.warnings).toEqual([expect.objectContaining({ code: 'fits-another', message: expect.stringMatching(/taken for no spacecraft.*Invented Two/s) })])
    // In the same place at its epoch, the ascending node 66.04° on, but in a plane turned by 0.9°: two orbits that cross.
    const crossing = await upload(world.deps, twoLines({ number: '70008', epoch: '26334.60773990', inclination: ' 98.3021', node: ' 45.2174', anomaly: '272.3457' }))
    expect(crossing.warnings).toEqual([])
  })
})
