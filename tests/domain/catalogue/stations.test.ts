import { beforeAll, beforeEach, describe, expect, it } from 'vitest'
import { eq } from 'drizzle-orm'
import { createAntennaBody, createRadioBody, createStationBody } from '#shared/schemas/stations'
import { radios } from '~~/server/database/schema'
import { changeAntenna } from '~~/server/domain/catalogue/change-antenna'
import { changeRadio } from '~~/server/domain/catalogue/change-radio'
import { changeStation } from '~~/server/domain/catalogue/change-station'
import { createAntenna } from '~~/server/domain/catalogue/create-antenna'
import { createRadio } from '~~/server/domain/catalogue/create-radio'
import { createStation } from '~~/server/domain/catalogue/create-station'
import { getRadio, listRadios } from '~~/server/domain/catalogue/read-radios'
import { getAntenna, getStation, listStations } from '~~/server/domain/catalogue/read-stations'
import { retireAntenna } from '~~/server/domain/catalogue/retire-antenna'
import { retireRadio } from '~~/server/domain/catalogue/retire-radio'
import { retireStation } from '~~/server/domain/catalogue/retire-station'
import type { PersonActor } from '~~/server/domain/context'
import { refusalOf, useTestDatabase } from '../../support/domain-test'
import type { SpacecraftFixture } from '../../support/fixtures'
import { addActor, addSpacecraft, addStation } from '../../support/fixtures'
import { emptyQueue, queuedJobs } from '../../support/queued-jobs'

const test = useTestDatabase()
const now = new Date('2026-12-01T12:00:00.000Z')
let actor: PersonActor
let craft: SpacecraftFixture
const deps = () => ({ db: test.db, actor, now })
const place = { latitudeDeg: 78.2, longitudeDeg: 15.4, heightM: 450, zone: 'Arctic/Longyearbyen' }
const radioBody = (antennaId: string, given: object = {}) => createRadioBody.parse({ antennaId, name: 'Modem', transmits: false, receives: true, tuneLowHz: 430e6, tuneHighHz: 440e6, stepHz: 10, ...given })
const askedStations = async () => (await queuedJobs(test.db, 'predict')).map(job => job.stationId)

beforeAll(async () => {
  actor = await addActor(test.db, ['administrator'])
  craft = await addSpacecraft(test.db, now)
})
beforeEach(() => emptyQueue(test.db))

describe('a station', () => {
  it('is made with a mask in order of azimuth, and its passes are asked for', async () => {
    const made = await createStation(deps(), createStationBody.parse({ name: 'North Holm', ...place, mask: [{ azimuthDeg: 180, elevationDeg: 8 }, { azimuthDeg: 0, elevationDeg: 3 }] }))
    expect(made).toMatchObject({ ...place, minElevationDeg: 5, publishAt: '18:00', freezeMinutes: 10, antennas: [], retiredAt: null })
    expect(made.mask.map(point => point.azimuthDeg)).toEqual([0, 180])
    expect(await queuedJobs(test.db, 'predict')).toEqual([expect.objectContaining({ spacecraftId: craft.id, stationId: made.id })])
    expect(await refusalOf(createStation(deps(), createStationBody.parse({ name: 'north holm', ...place })))).toMatchObject({ code: 'conflict', paths: ['name'] })
  })

  it.each([
    ['its place', { latitudeDeg: 78.3 }, 1], ['its mask', { mask: [{ azimuthDeg: 10, elevationDeg: 9 }] }, 1], ['its least elevation', { minElevationDeg: 7 }, 1], ['its clock', { clockErrorMs: 3 }, 1],
    ['its hour of publication', { publishAt: '17:00' }, 0], ['its name', { name: 'Elsewhere' }, 0], ['its mask to the same', { mask: [] }, 0],
  ])('asks for passes again when %s changes, if they depend on it', async (_, change, jobs) => {
    const { id } = await addStation(test.db)
    expect(await changeStation(deps(), id, change)).toMatchObject(change)
    expect(await askedStations()).toEqual(Array.from({ length: jobs }, () => id))
  })

  it('retires with antennas and radios, and asks for its passes to be taken back', async () => {
    const { id, antenna, radio } = await addStation(test.db)
    await retireStation(deps(), id)
    await retireStation(deps(), id)
    expect((await getStation(deps(), id)).retiredAt).toBe(now.toISOString())
    expect((await getAntenna(deps(), antenna.id)).retiredAt).toBe(now.toISOString())
    expect((await getRadio(deps(), radio.id)).retiredAt).toBe(now.toISOString())
    expect((await listStations(deps(), { limit: 1000 })).items.map(item => item.id)).not.toContain(id)
    expect((await listRadios(deps(), { limit: 1000 })).items.map(item => item.id)).not.toContain(radio.id)
    expect(await askedStations()).toEqual([id])
    expect(await refusalOf(changeStation(deps(), id, { name: 'Back' }))).toMatchObject({ code: 'conflict' })
  })
})

describe('antennas and radios', () => {
  it('stand under their station, and retired ones do not', async () => {
    const { id } = await addStation(test.db)
    const antenna = await createAntenna(deps(), createAntennaBody.parse({ stationId: id, name: 'South dish' }))
    expect(await changeAntenna(deps(), antenna.id, { setupS: 60 })).toMatchObject({ setupS: 60, name: 'South dish' })
    const radio = await createRadio(deps(), radioBody(antenna.id))
    const second = await createRadio(deps(), radioBody(antenna.id, { name: 'Second' }))
    expect(await askedStations()).toEqual([id])
    await retireRadio(deps(), second.id)
    const found = (await getStation(deps(), id)).antennas.find(item => item.id === antenna.id)!
    expect(found.radios.map(item => item.id)).toEqual([radio.id])
    expect(found.radios[0]).toMatchObject({ stationId: id, antennaName: 'South dish', minDwellS: 1, latencyMs: 50 })
    await emptyQueue(test.db)
    await retireAntenna(deps(), antenna.id)
    expect((await getStation(deps(), id)).antennas.map(item => item.name)).toEqual(['Antenna'])
    expect((await getRadio(deps(), radio.id)).retiredAt).toBe(now.toISOString())
    expect(await askedStations()).toEqual([id])
  })

  it('are refused where their station or antenna is not there or retired, and under a taken name', async () => {
    const gone = await addStation(test.db, { retiredAt: now })
    const here = await addStation(test.db)
    expect(await refusalOf(createAntenna(deps(), createAntennaBody.parse({ stationId: gone.id, name: 'A' })))).toMatchObject({ code: 'not-valid', paths: ['stationId'] })
    expect(await refusalOf(createAntenna(deps(), createAntennaBody.parse({ stationId: here.id, name: 'antenna' })))).toMatchObject({ code: 'conflict', paths: ['name'] })
    expect(await refusalOf(createRadio(deps(), radioBody(actor.id)))).toMatchObject({ code: 'not-valid', paths: ['antennaId'] })
    expect(await refusalOf(createRadio(deps(), radioBody(here.antenna.id, { name: 'RADIO' })))).toMatchObject({ code: 'conflict', paths: ['name'] })
  })

  it('hold a radio’s rules between fields on the radio as it would stand', async () => {
    const { id, radio } = await addStation(test.db, {}, { tuneLowHz: 430e6, tuneHighHz: 440e6, transmits: false })
    expect(await refusalOf(changeRadio(deps(), radio.id, { tuneLowHz: 450e6 }))).toMatchObject({ code: 'not-valid', paths: ['tuneHighHz'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { receives: false }))).toMatchObject({ code: 'not-valid', paths: ['receives'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { ramps: true }))).toMatchObject({ code: 'not-valid', paths: ['slopeStepHzPerS'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { ramps: true, slopeStepHzPerS: 2, maxSlopeHzPerS: 1 }))).toMatchObject({ code: 'not-valid', paths: ['maxSlopeHzPerS'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { planMode: 'cadence' }))).toMatchObject({ code: 'not-valid', paths: ['cadenceS'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { planMode: 'cadence', cadenceS: 0.5 }))).toMatchObject({ code: 'not-valid', paths: ['cadenceS'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { converterInverts: true }))).toMatchObject({ code: 'not-valid', paths: ['converterLoHz'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { converterLoHz: 465e6 }))).toMatchObject({ code: 'not-valid', paths: ['converterLoHz'] })
    expect(await refusalOf(changeRadio(deps(), radio.id, { converterLoHz: 400e6, converterInverts: true }))).toMatchObject({ code: 'not-valid', paths: ['converterLoHz'] })
    await changeRadio(deps(), radio.id, { name: 'Renamed' })
    expect(await askedStations()).toEqual([])
    expect(await changeRadio(deps(), radio.id, { stepHz: 1 })).toMatchObject({ stepHz: 1, name: 'Renamed' })
    expect(await askedStations()).toEqual([id])
  })

  it('ramp, keep a cadence and stand behind a converter as they are said to, and have their tables made anew', async () => {
    const { id, radio } = await addStation(test.db, {}, { tuneLowHz: 430e6, tuneHighHz: 440e6, transmits: false })
    const modes = { ramps: true, slopeStepHzPerS: 0.5, maxSlopeHzPerS: 400, planMode: 'cadence', cadenceS: 2, converterLoHz: 465.5e6, converterInverts: true } as const
    expect(await changeRadio(deps(), radio.id, modes)).toMatchObject(modes)
    expect(await askedStations()).toEqual([id])
  })

  it('are kept from what contradicts itself by the database too', async () => {
    const { radio } = await addStation(test.db, {}, { tuneLowHz: 430e6, tuneHighHz: 440e6, transmits: false })
    const keep = (change: Partial<typeof radios.$inferInsert>) => test.db.update(radios).set(change).where(eq(radios.id, radio.id))
    const broken = (constraint: string) => ({ cause: { constraint } })
    await expect(keep({ ramps: true, slopeStepHzPerS: 1 })).rejects.toMatchObject(broken('radios_ramp_stated'))
    await expect(keep({ planMode: 'cadence' })).rejects.toMatchObject(broken('radios_plan_mode_stated'))
    await expect(keep({ converterLoHz: 400e6, converterInverts: true })).rejects.toMatchObject(broken('radios_converter_side'))
    await expect(keep({ converterInverts: true })).rejects.toMatchObject(broken('radios_converter_side'))
  })
})
