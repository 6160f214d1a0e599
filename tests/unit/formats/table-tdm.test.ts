import { describe, expect, it } from 'vitest'
import { cautionFor } from '#shared/formats/published-table'
import { tableTdm } from '#shared/formats/table-tdm'
import { servedTable } from './table-fixture'
import { readTdm, transmittedAt } from './tdm-reader'

// Rules and meaning of keywords: CCSDS 503.0-B-2, by a reader of the test's own.
const uplink = servedTable()
const rows = uplink.retunes
const downlink = (changes: Parameters<typeof servedTable>[0] = {}) => servedTable({
  link: { ...uplink.link, name: 'Beacon', direction: 'downlink' }, caution: cautionFor('downlink'),
  // Approaching: received above the carrier; receding: below.
  retunes: [{ ...rows[0]!, frequencyHz: 437_509_790, dopplerHz: 9790.123 }, { ...rows[1]!, frequencyHz: 437_490_210, dopplerHz: -9790.123, rangeRateMps: 6709.1 }],
  ...changes,
})
const ms = (text: string) => Date.parse(text)
const words = (lines: string[]) => lines.join(' ')

describe('an uplink as a Tracking Data Message', () => {
  it('is the ramps that the station transmits: frequency and rate of each row, from the instant of effect on', () => {
    const ramping = { ...uplink, retunes: [{ ...rows[0]!, slopeHzPerS: 38.25 }, { ...rows[1]!, slopeHzPerS: -0.5 }] }
    const message = readTdm(tableTdm(ramping))
    expect(message.metadata).toMatchObject({ TIME_SYSTEM: 'UTC', PARTICIPANT_1: '=COVE+1', PARTICIPANT_2: 'PETREL "A", FIRST', MODE: 'SEQUENTIAL', PATH: '1,2', TIMETAG_REF: 'TRANSMIT' })
    const effect = ms(rows[0]!.at) + 50
    expect(message.records).toEqual([
      { keyword: 'TRANSMIT_FREQ_1', at: effect, value: 437_490_210 }, { keyword: 'TRANSMIT_FREQ_RATE_1', at: effect, value: 38.25 },
      { keyword: 'TRANSMIT_FREQ_1', at: ms(rows[1]!.at) + 50, value: 437_500_000 }, { keyword: 'TRANSMIT_FREQ_RATE_1', at: ms(rows[1]!.at) + 50, value: -0.5 },
    ])
    expect(transmittedAt(message, effect + 10_000)).toBeCloseTo(437_490_592.5, 6)
    expect(message.metadata).toMatchObject({ START_TIME: '2026-12-01T03:12:45.123', STOP_TIME: '2026-12-01T03:22:10.500' })
  })

  it('transmits below the carrier while the spacecraft approaches, as range rate and carrier ask', () => {
    // f·(1 + ρ̇/c), first order; ρ̇ negative when approaching (mechanics).
    const [record] = readTdm(tableTdm(uplink)).records
    expect(record!.value - 437_500_000).toBeCloseTo(437_500_000 * -6709.1 / 299_792_458, -2)
  })

  it('says in words that it is a plan, what is in it and how it is checked, in lines that fit', () => {
    const { header, comments } = readTdm(tableTdm(uplink))
    expect(header).toMatchObject({ CREATION_DATE: '2026-11-30T07:00:00.000', ORIGINATOR: 'NULLBEAT', MESSAGE_ID: 'TABLE-1-REVISION-3' })
    expect(comments.header[0]).toMatch(/^PLAN, NOT A MEASUREMENT/)
    expect(comments.header).toEqual(expect.arrayContaining(['Table table-1', 'Revision 3, supersedes revision 2', `Digest ${uplink.digest}`, `Signature ${uplink.signature}`]))
    expect(words(comments.header)).toContain(uplink.caution)
    expect(words(comments.metadata)).toMatch(/sky frequencies.*set to the sky frequency itself.*instant of effect at the station: command 50 ms earlier/)
    expect(words(comments.data)).toMatch(/Planned settings/)
  })

  it('keeps to ASCII and to its line whatever names hold', () => {
    const name = `Żółw “É” 衛星\r\n${'x'.repeat(300)}`
    const message = readTdm(tableTdm(servedTable({ signature: `${'h'.repeat(400)}..${'s'.repeat(86)}`, pass: { ...uplink.pass, spacecraft: { id: 'c', name, catalogueNumber: null }, station: { id: 's', name: 'Ålesund – nord' } } })))
    expect(message.metadata.PARTICIPANT_1).toBe('ALESUND - NORD')
    expect(message.metadata.PARTICIPANT_2).toMatch(/^ZO\?W "E" \?\?/)
    expect(message.comments.header.join('')).toContain(`${'h'.repeat(400)}..`)
  })
})

describe('a downlink as a Tracking Data Message', () => {
  it('is what the receiver is set to, said to be no received frequency, above the carrier while approaching', () => {
    const message = readTdm(tableTdm(downlink()))
    expect(message.metadata).toMatchObject({ PATH: '2,1', TIMETAG_REF: 'RECEIVE' })
    expect(message.records.map(({ keyword, value }) => [keyword, value])).toEqual([['RECEIVE_FREQ_1', 437_509_790], ['RECEIVE_FREQ_1', 437_490_210]])
    // Transmitted minus received has the sign of range rate (the standard's Doppler: positive when receding).
    message.records.forEach(({ value }, i) => expect(Math.sign(437_500_000 - value)).toBe(Math.sign([-6709.1, 6709.1][i]!)))
    expect(words(message.comments.data)).toContain('not received frequencies')
    expect(words(message.comments.metadata)).toContain('held until the next time tag')
  })

  it('of a receiver that ramps has the setting at each row’s start and end', () => {
    const { retunes } = downlink()
    const message = readTdm(tableTdm(downlink({ retunes: [{ ...retunes[0]!, slopeHzPerS: -40 }, retunes[1]!] })))
    const [start, end] = [ms(rows[0]!.at) + 50, ms(rows[1]!.at) + 49]
    expect(message.records.map(({ at }) => at)).toEqual([start, end, end + 1, ms(uplink.pass.los)])
    expect(message.records[1]!.value).toBeCloseTo(437_509_790 - 40 * (end - start) / 1000, 6)
    expect(message.records[2]!.value).toBe(message.records[3]!.value)
    expect(words(message.comments.metadata)).toContain('runs straight')
  })

  it('behind a converter is on the sky, with the rule for the dial beside it', () => {
    // An inverting converter: sky = local oscillator − dial (mechanics).
    const dial = { ...rows[0]!, frequencyHz: 1_262_490_210, slopeHzPerS: 12 }
    const up = readTdm(tableTdm(servedTable({ radio: { ...uplink.radio, converter: { loHz: 1_700_000_000, inverts: true } }, retunes: [dial] })))
    expect(up.records.map(({ value }) => value)).toEqual([437_509_790, -12])
    expect(words(up.comments.metadata)).toContain('1700000000 Hz minus sky frequency; slopes change sign')
    const plain = readTdm(tableTdm(downlink({ radio: { ...uplink.radio, converter: { loHz: 300_000_000, inverts: false } }, retunes: [{ ...rows[0]!, frequencyHz: 137_509_790.25 }] })))
    expect(plain.records[0]!.value).toBe(437_509_790.25)
    expect(words(plain.comments.metadata)).toContain('sky frequency minus 300000000 Hz')
  })

  it('of a coherent link names the ratio and the way round', () => {
    const { metadata, comments } = readTdm(tableTdm(downlink({ link: { ...uplink.link, direction: 'downlink', turnaround: { numerator: 240, denominator: 221, uplinkPrecompensated: true } } })))
    expect(metadata).toMatchObject({ PATH: '1,2,1', TURNAROUND_NUMERATOR: '240', TURNAROUND_DENOMINATOR: '221' })
    expect(words(comments.metadata)).toContain('one-way shift only')
  })
})

describe('the reader that judges', () => {
  it('refuses what the standard forbids', () => {
    const text = tableTdm(uplink)
    const wrong: [string, string, RegExp][] = [
      ['a missing keyword', text.replace(/ORIGINATOR.*\n/, ''), /ORIGINATOR is missing/], ['a keyword out of order', text.replace(/(MODE = .*\n)(PATH = .*\n)/, '$2$1'), /out of order/],
      ['a long line', text.replace('COMMENT Table', `COMMENT ${'x'.repeat(260)}`), /characters/], ['a comment among the data', text.replace('DATA_STOP', 'COMMENT x\nDATA_STOP'), /where none may/],
      ['a record out of time', text.replace('DATA_STOP', 'TRANSMIT_FREQ_1 = 2026-12-01T03:12:46.000 437500000\nDATA_STOP'), /order of time/], ['a negative frequency', text.replace('437490210', '-1'), /no time tag and value/],
      ['an accent', text.replace('COMMENT Table', 'COMMENT Tàble'), /ASCII/], ['a path to nobody', text.replace('PATH = 1,2', 'PATH = 1,3'), /participant 3/],
    ]
    for (const [what, broken, message] of wrong) {
      expect(broken, what).not.toBe(text)
      expect(() => readTdm(broken), what).toThrow(message)
    }
  })
})
