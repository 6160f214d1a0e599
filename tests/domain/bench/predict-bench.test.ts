import { randomUUID } from 'node:crypto'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { benchRadio } from '#shared/schemas/bench'
import { elementSets, radios, antennas } from '~~/server/database/schema'
import type { Deps } from '~~/server/domain/context'
import type { World } from '../elements/support'
import { addLink, addSpacecraft, addStation, openWorld, twoLines, upload } from '../elements/support'
import { referenceDoppler } from '../../support/reference-data'
import { bench, deps, reader } from './support'

const text = twoLines()
const place = { latitudeDeg: 69, longitudeDeg: 18, heightM: 100 }
const day = { from: '2026-11-30T12:00:00Z', to: '2026-12-01T12:00:00Z' }
const ask = (change: object = {}, given: Deps = deps) => bench({ elements: { text }, station: place, ...day, ...change } as Parameters<typeof bench>[0], given)
const refused = (path: string, message: RegExp) => ({ code: 'not-valid', fields: [expect.objectContaining({ path, message: expect.stringMatching(message) })] })

describe('a what-if', () => {
  it('gives tables whose rows keep what an independent program needs inside the allowance, both ways', async () => {
    // Source: Skyfield with python-sgp4, special relativity (data/README.md).
    const reference = referenceDoppler()
    for (const pass of reference.passes) {
      const startMs = Date.parse(pass.windowStart) + pass.startS * 1000
      const last = pass.lightTimeDownS.length - 1
      const { latitudeDeg, longitudeDeg, heightM } = pass.station
      for (const [direction, columns] of [['downlink', pass.receivedMinusCarrierHz], ['uplink', pass.transmitMinusCarrierHz]] as const) {
        const { passes } = await bench({
          elements: { text: `${pass.line1}\n${pass.line2}` }, station: { latitudeDeg, longitudeDeg, heightM, minElevationDeg: 0 },
          from: new Date(startMs).toISOString(), to: new Date(startMs + last * pass.stepS * 1000).toISOString(), link: { direction, carrierHz: 437.5e6 },
        })
        const needed = Object.entries(columns).find(([key]) => Number(key) === 437.5e6)![1]
        for (const { aos, los, table } of passes) {
          // 0.5 dB at 9600 Bd: 0.185991 · 9600 Hz.
          expect(table!.allowanceHz).toBeCloseTo(1785.5, 1)
          expect(table).toMatchObject({ verdict: 'holds', limitedBy: 'loss', faults: [], excess: [] })
          expect(Date.parse(table!.retunes[0]!.at) + 50).toBeLessThanOrEqual(Date.parse(aos))
          needed.forEach((hz, k) => {
            const atMs = startMs + k * pass.stepS * 1000
            if (atMs < Date.parse(aos) || atMs > Date.parse(los)) return
            const row = table!.retunes.findLast(retune => Date.parse(retune.at) + 50 <= atMs)!
            expect(Math.abs(437.5e6 + hz - row.frequencyHz)).toBeLessThanOrEqual(0.8 * table!.allowanceHz + 0.05)
            expect(row.frequencyHz % 10).toBe(0)
          })
        }
      }
    }
  })

  it('gives rows that ramp and keep what the independent program needs, fewer than steps do, and asks for what a ramp needs', async () => {
    const pass = referenceDoppler().passes[0]!
    const startMs = Date.parse(pass.windowStart) + pass.startS * 1000
    const { latitudeDeg, longitudeDeg, heightM } = pass.station
    const question = (radio: object) => bench({
      elements: { text: `${pass.line1}\n${pass.line2}` }, station: { latitudeDeg, longitudeDeg, heightM, minElevationDeg: 0 }, from: new Date(startMs).toISOString(),
      to: new Date(startMs + (pass.lightTimeDownS.length - 1) * pass.stepS * 1000).toISOString(), link: { carrierHz: 437.5e6 }, radio,
    } as Parameters<typeof bench>[0])
    const [stepped] = (await question({})).passes
    const [ramped] = (await question({ ramp: true, slopeStepHzPerS: 0.5, maxSlopeHzPerS: 500 })).passes
    const { retunes, allowanceHz, verdict, faults } = ramped!.table!
    expect({ verdict, faults }).toEqual({ verdict: 'holds', faults: [] })
    expect(retunes.length).toBeLessThan(stepped!.table!.retunes.length / 1.5)
    pass.receivedMinusCarrierHz['437500000.0']!.forEach((hz, k) => {
      const atMs = startMs + k * pass.stepS * 1000
      if (atMs < Date.parse(ramped!.aos) || atMs > Date.parse(ramped!.los)) return
      const row = retunes.findLast(retune => Date.parse(retune.at) + 50 <= atMs)!
      expect(Math.abs(437.5e6 + hz - row.frequencyHz - row.slopeHzPerS * (atMs - Date.parse(row.at) - 50) / 1000)).toBeLessThanOrEqual(0.8 * allowanceHz + 0.05)
    })
    expect(benchRadio.safeParse({ ramp: true, maxSlopeHzPerS: 500 }).error?.issues).toMatchObject([{ path: ['slopeStepHzPerS'] }])
    expect(benchRadio.safeParse({ ramp: true, slopeStepHzPerS: 1 }).error?.issues).toMatchObject([{ path: ['maxSlopeHzPerS'] }])
    expect(benchRadio.safeParse({ ramp: true, slopeStepHzPerS: 2, maxSlopeHzPerS: 1 }).error?.issues).toMatchObject([{ path: ['maxSlopeHzPerS'] }])
  })

  it('has no budget but the steps where none is given, and every part where it is', async () => {
    const [plain] = (await ask()).passes
    expect(plain!.table!.budget).toEqual({ stepsHz: expect.any(Number), timingHz: 0, ut1Hz: 0, orbitHz: 0, oscillatorHz: 0, trimHz: 0 })
    expect(plain!.table!.worstResidualHz).toBeCloseTo(Math.abs(plain!.table!.budget.stepsHz), 6)
    const [full] = (await ask({ budget: { clockErrorMs: 10, alongTrackSigmaS: 0.1, spacecraftPpm: 0.1, stationPpm: 0.1, ut1BoundS: 0.05 } })).passes
    const { stepsHz, timingHz, ut1Hz, orbitHz, oscillatorHz, trimHz } = full!.table!.budget
    // Mechanics: limits of 0.1 ppm at 437.5 MHz as even spreads, √(43.75² + 43.75²)/√3 Hz.
    expect(oscillatorHz).toBeCloseTo(35.72, 2)
    expect(full!.table!.worstResidualHz).toBeCloseTo(Math.abs(stepsHz) + timingHz + ut1Hz + 2 * Math.hypot(orbitHz, oscillatorHz, trimHz), 6)
    expect(Math.min(timingHz, ut1Hz, orbitHz)).toBeGreaterThan(0)
  })

  it('says how uncertain each sample is: what the budget holds beyond its steps', async () => {
    const [plain] = (await ask()).passes
    expect(plain!.samples.every(sample => sample.uncertaintyHz === 0)).toBe(true)
    const passes = (await ask({ budget: { clockErrorMs: 10, alongTrackSigmaS: 0.1, spacecraftPpm: 0.1, stationPpm: 0.1, ut1BoundS: 0.05, k: 3 }, sampleIntervalS: 1 })).passes
    for (const { table, samples } of passes) {
      const { timingHz, ut1Hz, orbitHz, oscillatorHz } = table!.budget
      const nearest = samples.reduce((best, sample) => Math.abs(Date.parse(sample.at) - Date.parse(table!.worstAt)) < Math.abs(Date.parse(best.at) - Date.parse(table!.worstAt)) ? sample : best)
      // Limits add; k times the root of the squares of the spreads. Within half a second it moves by under a per cent.
      expect(nearest.uncertaintyHz / (timingHz + ut1Hz + 3 * Math.hypot(orbitHz, oscillatorHz))).toBeCloseTo(1, 2)
    }
  })

  it('gives the workable part above mask and minimum, whose ends lie on the horizon beside each sample', async () => {
    const mask = [{ azimuthDeg: 0, elevationDeg: 8 }, { azimuthDeg: 180, elevationDeg: 30 }]
    const passes = (await ask({ station: { ...place, mask }, sampleIntervalS: 0.1 })).passes.filter(pass => pass.table)
    expect(passes.length).toBeGreaterThan(2)
    for (const { table, samples } of passes) {
      for (const { at, azimuthDeg, horizonDeg, elevationDeg } of samples) {
        // Linear between the mask's two points, on either side of north.
        const turn = Math.min(azimuthDeg, 360 - azimuthDeg)
        expect(horizonDeg).toBeCloseTo(8 + turn * 22 / 180, 6)
        const inside = table!.workable.some(({ from, to }) => from <= at && at <= to)
        if (Math.abs(elevationDeg - horizonDeg) > 0.01) expect(inside).toBe(elevationDeg > horizonDeg)
      }
    }
  })

  it('samples from AOS by the interval asked for, with culmination and LOS, in whole milliseconds', async () => {
    for (const pass of (await ask({ sampleIntervalS: 7.5 })).passes) {
      const times = pass.samples.map(sample => Date.parse(sample.at))
      const grid = times.filter(time => (time - times[0]!) % 7500 === 0)
      expect(times[0]).toBe(Date.parse(pass.aos))
      expect(times.at(-1)).toBe(Date.parse(pass.los))
      expect(grid.length).toBe(Math.floor((times.at(-1)! - times[0]!) / 7500) + 1)
      expect(times.filter(time => !grid.includes(time)).every(time => [Date.parse(pass.culmination), Date.parse(pass.los)].includes(time))).toBe(true)
      expect(pass).not.toHaveProperty('aosClipped')
    }
  })

  it('heeds a mask in degrees: what stands above it is left out', async () => {
    const open = (await ask()).passes
    const walled = (await ask({ station: { ...place, mask: [{ azimuthDeg: 0, elevationDeg: 30 }] } })).passes
    expect(walled.length).toBe(open.filter(pass => pass.maxElevationDeg > 30).length)
    expect(walled.every(pass => Math.abs(pass.samples[0]!.elevationDeg - 30) < 0.001)).toBe(true)
  })

  it('moves passes with UT1: the station turns on by 0.5 s', async () => {
    const shifted = (await ask({ ut1MinusUtcS: 0.5 })).passes
    const plain = (await ask()).passes
    const moved = shifted.map((pass, i) => Math.abs(Date.parse(pass.culmination) - Date.parse(plain[i]!.culmination)))
    expect(Math.max(...moved)).toBeGreaterThan(10)
    expect(Math.max(...moved)).toBeLessThan(600)
  })

  it('says when the elements end inside the window', async () => {
    const answer = await ask({ elements: { text: twoLines({ meanMotion: '16.40000000', bstar: ' 50000-3' }) }, to: '2026-12-14T12:00:00Z' })
    expect(answer.notes).toEqual([expect.stringMatching(/can be used until 2026-1\d-\d\dT.* only/)])
    expect(Date.parse(answer.passes.at(-1)!.los)).toBeLessThanOrEqual(Date.parse(/until (\S+) only/.exec(answer.notes[0]!)![1]!))
  })

  it('passes on what the elements’ reader warns of', async () => {
    const noChecksum = text.split('\n').map(line => line.slice(0, 68)).join('\n')
    expect((await ask({ elements: { text: noChecksum } })).notes[0]).toMatch(/^Line \d: .*hecksum/)
  })
})

describe('a what-if that cannot be answered', () => {
  it('names the limit of the window and of the samples', async () => {
    await expect(ask({ to: '2026-12-14T12:00:00.001Z' })).rejects.toMatchObject(refused('to', /14 days/))
    await expect(ask({ to: day.from })).rejects.toMatchObject(refused('to', /after the beginning/))
    await expect(ask({ sampleIntervalS: 0.01 })).rejects.toMatchObject(refused('sampleIntervalS', /100,000 samples/))
  })

  it('names the line of elements that cannot be taken', async () => {
    const [line1, line2] = text.split('\n') as [string, string]
    const wrong = `${line1.slice(0, 68)}${(Number(line1[68]) + 1) % 10}`
    await expect(ask({ elements: { text: `NAME\n${wrong}\n${line2}` } })).rejects.toMatchObject({ code: 'not-valid', fields: [{ path: 'elements.text', line: 2, message: expect.stringMatching(/column 69/) }] })
    await expect(ask({ elements: { text: 'hello' } })).rejects.toMatchObject(refused('elements.text', /no element set/))
    await expect(ask({ elements: { text: text + twoLines({ number: '90002' }) } })).rejects.toMatchObject({ code: 'not-valid', fields: [{ path: 'elements.text', line: 3 }] })
  })
})

describe('a what-if with stored things', () => {
  let world: World
  let stored: { elementSetId: string, stationId: string, linkId: string, radioId: string }
  beforeAll(async () => {
    world = await openWorld()
    const spacecraftId = await addSpacecraft(world.deps)
    const stationId = await addStation(world.deps)
    const linkId = await addLink(world.deps, spacecraftId, { minElevationDeg: 20, symbolRateHz: 4800 })
    const [antenna] = await world.deps.db.insert(antennas).values({ stationId, name: 'Dish' }).returning()
    const [radio] = await world.deps.db.insert(radios).values({ antennaId: antenna!.id, name: 'Radio', transmits: false, receives: true, tuneLowHz: 430e6, tuneHighHz: 440e6, stepHz: 25 }).returning()
    await upload(world.deps, text)
    const [set] = await world.deps.db.select().from(elementSets)
    stored = { elementSetId: set!.id, stationId, linkId, radioId: radio!.id }
  })
  afterAll(() => world.close())
  const askStored = (deps: Deps, { elementSetId, stationId, linkId, radioId } = stored) => ask({ elements: { elementSetId }, station: { stationId }, link: { linkId }, radio: { radioId } }, deps)

  it('predicts as it does with the same things written out', async () => {
    const answer = await askStored({ ...world.deps, actor: reader })
    const inline = await ask()
    expect(answer.passes.map(pass => pass.aos)).toEqual(inline.passes.map(pass => pass.aos))
    expect(answer.passes.some(pass => pass.table === null)).toBe(true)
    for (const { table, maxElevationDeg } of answer.passes) {
      expect(table === null).toBe(maxElevationDeg < 20)
      if (!table) continue
      expect(table.allowanceHz).toBeCloseTo(0.185991 * 4800, 1)
      expect(table.retunes.every(row => row.frequencyHz % 25 === 0)).toBe(true)
    }
  })

  it('answers for the dial of a held radio behind a converter, at its cadence', async () => {
    const [antenna] = await world.deps.db.insert(antennas).values({ stationId: stored.stationId, name: 'Second dish' }).returning()
    const [radio] = await world.deps.db.insert(radios).values({
      antennaId: antenna!.id, name: 'Behind', transmits: false, receives: true, tuneLowHz: 430e6, tuneHighHz: 440e6, stepHz: 25,
      converterLoHz: 465.5e6, converterInverts: true, planMode: 'cadence', cadenceS: 5,
    }).returning()
    const { passes } = await askStored({ ...world.deps, actor: reader }, { ...stored, radioId: radio!.id })
    const tables = passes.flatMap(({ table }) => table ? [table] : [])
    expect(tables.length).toBeGreaterThan(0)
    for (const { retunes, faults } of tables) {
      expect(faults).toEqual([])
      // 465.5 − 437.5 MHz; a downlink's fall is a rise on this dial.
      for (const row of retunes) expect(Math.abs(row.frequencyHz - 28e6)).toBeLessThan(12e3)
      expect(retunes.at(-1)!.frequencyHz).toBeGreaterThan(retunes[0]!.frequencyHz)
      retunes.slice(1).forEach((row, i) => expect(Date.parse(row.at) - Date.parse(retunes[i]!.at)).toBe(5000))
    }
  })

  it('refuses what is not there, and what a key may not read', async () => {
    const nowhere = randomUUID()
    const deps = { ...world.deps, actor: reader }
    await expect(askStored(deps, { ...stored, elementSetId: nowhere })).rejects.toMatchObject(refused('elements.elementSetId', /no such/))
    await expect(askStored(deps, { ...stored, stationId: nowhere })).rejects.toMatchObject(refused('station.stationId', /no such/))
    await expect(askStored(deps, { ...stored, linkId: nowhere })).rejects.toMatchObject(refused('link.linkId', /no such/))
    await expect(askStored(deps, { ...stored, radioId: nowhere })).rejects.toMatchObject(refused('radio.radioId', /no such/))
    const station = (stationId: string): Deps => ({ ...world.deps, actor: { kind: 'key', id: nowhere, name: 'Station', scope: 'station', stationId } })
    await expect(ask({ station: { stationId: stored.stationId } }, station(nowhere))).rejects.toMatchObject(refused('station.stationId', /no such/))
    expect((await ask({ station: { stationId: stored.stationId } }, station(stored.stationId))).passes.length).toBeGreaterThan(0)
    await expect(askStored(station(stored.stationId))).rejects.toMatchObject(refused('elements.elementSetId', /no such/))
  })
})
