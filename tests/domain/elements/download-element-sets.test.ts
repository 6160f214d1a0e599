import { randomUUID } from 'node:crypto'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { readElements } from '#shared/formats/elements/read-elements'
import { ELEMENT_NOTATIONS } from '#shared/formats/elements/write/write-elements'
import { settings } from '~~/server/database/schema'
import type { Deps } from '~~/server/domain/context'
import { downloadElementSets } from '~~/server/domain/elements/download-element-sets'
import type { World } from './support'
import { openWorld, twoLines, upload } from './support'

let world: World
let deps: Deps
beforeEach(async () => {
  world = await openWorld()
  deps = world.deps
})
afterEach(() => world.close())

const oneOmm = (change: Record<string, unknown> = {}) => JSON.stringify({
  OBJECT_NAME: 'A "B" / C', OBJECT_ID: '2026-801A', EPOCH: '2026-11-30T12:17:46.665889', MEAN_MOTION: 15.21987654, ECCENTRICITY: 0.0012345, INCLINATION: 97.4021, RA_OF_ASC_NODE: 45.1234, ARG_OF_PERICENTER: 87.6543,
  MEAN_ANOMALY: 272.5678, NORAD_CAT_ID: 90001, BSTAR: 0.00031234, MEAN_MOTION_DOT: 8.123e-5, MEAN_MOTION_DDOT: 0, ...change,
})
const addSet = async (text: string) => (await upload(deps, text)).sets[0]!.id
const firstLines = (text: string) => text.split('\n').slice(0, 3)

describe('downloading element sets', () => {
  it('gives the lines of a TLE that came in, with a name for the file', async () => {
    const id = await addSet(twoLines())
    const file = await downloadElementSets(deps, { ids: [id], notation: 'tle' })
    expect(file).toMatchObject({ mediaType: 'text/plain', fileName: '90001-20261130T121746Z.tle', rounded: [] })
    // Zero has two spellings; the published one is written, whose minus counts in the checksum.
    const [line1, line2] = twoLines().split('\n') as [string, string]
    const spelled = line1.slice(0, 68).replace('00000+0', '00000-0')
    expect(file.text).toBe(`${spelled}${checksum(spelled)}\n${line2}\n`)
  })

  it.each(ELEMENT_NOTATIONS)('gives %s that reads back as the set that is held', async (notation) => {
    const id = await addSet(oneOmm({ EPOCH: '2026-11-30T12:17:46.665888' }))
    const { text } = await downloadElementSets(deps, { ids: [id], notation })
    const again = readElements(Buffer.from(text), { nowMs: deps.now.getTime() })
    // The upload of a set that is held already is recognised by its content.
    expect(again).toMatchObject({ kind: 'read', sets: [{ elements: { name: 'A "B" / C', catalogueNumber: '90001', meanMotionRevPerDay: 15.21987654 } }] })
    expect(await upload(deps, text, `again.${notation}`)).toMatchObject({ accepted: 0, alreadyHeld: 1 })
  })

  it('says who made a message and when, and what a TLE rounds', async () => {
    await deps.db.insert(settings).values({ key: 'organisation', value: 'Invented & Co' }).onConflictDoUpdate({ target: settings.key, set: { value: 'Invented & Co' } })
    const id = await addSet(oneOmm())
    const kvn = await downloadElementSets(deps, { ids: [id], notation: 'kvn' })
    expect(firstLines(kvn.text).map(line => line.replace(/\s+/g, ' '))).toEqual(['CCSDS_OMM_VERS = 3.0', `CREATION_DATE = ${deps.now.toISOString().slice(0, 19)}`, 'ORIGINATOR = Invented & Co'])
    expect((await downloadElementSets(deps, { ids: [id], notation: 'xml' })).text).toContain('<ORIGINATOR>Invented &amp; Co</ORIGINATOR>')
    expect(await downloadElementSets(deps, { ids: [id], notation: 'tle' })).toMatchObject({ rounded: ['EPOCH', 'ELEMENT_SET_NO', 'REV_AT_EPOCH'] })
  })

  it('puts several into one file in the order asked for', async () => {
    const [a, b] = [await addSet(twoLines()), await addSet(twoLines({ number: '90002', designator: '26802A' }))]
    const file = await downloadElementSets(deps, { ids: [b, a], notation: 'csv' })
    expect(file).toMatchObject({ mediaType: 'text/csv', fileName: '2-element-sets.csv' })
    expect(file.text.split('\r\n').map(row => row.split(',')[1])).toEqual(['OBJECT_ID', '2026-802A', '2026-801A', undefined])
  })

  it('names a file after what is known, in plain characters', async () => {
    const name = async (change: Record<string, unknown>) => (await downloadElementSets(deps, { ids: [await addSet(oneOmm(change))], notation: 'json' })).fileName
    expect(await name({ NORAD_CAT_ID: null })).toBe('2026-801A-20261130T121746Z.json')
    expect(await name({ NORAD_CAT_ID: null, OBJECT_ID: null, OBJECT_NAME: '../../"x"\r\nSet-Cookie: a=b', MEAN_ANOMALY: 1 })).toBe('x-Set-Cookie-a-b-20261130T121746Z.json')
    expect(await name({ NORAD_CAT_ID: null, OBJECT_ID: null, OBJECT_NAME: '衛星', MEAN_ANOMALY: 2 })).toBe('element-set-20261130T121746Z.json')
  })

  it('refuses a TLE that cannot be, and a set that is not there', async () => {
    const id = await addSet(oneOmm({ NORAD_CAT_ID: 799500123 }))
    await expect(downloadElementSets(deps, { ids: [id], notation: 'tle' })).rejects.toMatchObject({ code: 'not-valid', message: expect.stringContaining('339999'), fields: [{ path: 'notation' }] })
    await expect(downloadElementSets(deps, { ids: [id, randomUUID()], notation: 'csv' })).rejects.toMatchObject({ code: 'not-found' })
  })
})

/** Digits count themselves, minus signs one, modulo 10. */
const checksum = (line: string) => [...line.slice(0, 68)].reduce((sum, c) => sum + (c === '-' ? 1 : /\d/.test(c) ? Number(c) : 0), 0) % 10
