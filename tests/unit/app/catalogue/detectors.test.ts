import { describe, expect, it } from 'vitest'
import { detectorSentence, detectors, hasCurve, lobeEndHz } from '~/utils/catalogue/detectors'
import { isUsual, proposalFor, proposals } from '~/utils/catalogue/detector-by-modulation'

const figures = { symbolRateHz: 9600, rolloff: null, bandwidthHz: 125_000, spreadingFactor: 10 }

describe('what a detector is, in the form', () => {
  // First nulls: 1/T in quadrature, 1/(2T) coherent, 1/T of the half-sine pulse, one spacing; failures: phase turned by 90° a symbol, a tone between both filters.
  it.each([['quadrature', 9600], ['coherent', 4800], ['msk', 9600], ['differential', 2400], ['fsk', 4800], ['multicarrier', 9600], ['chirp', null], ['stated', null]] as const)('%s ends at %s Hz for 9 600 symbols a second', (detector, hz) => {
    expect(lobeEndHz({ ...figures, detector })).toBe(hz)
    expect(hasCurve(detector)).toBe(hz !== null)
  })

  it('says where it fails in hertz, and keeps quiet until the symbol rate is typed', () => {
    expect(detectorSentence('coherent', figures)).toContain('half the symbol rate: 4\u202F800 Hz here')
    expect(detectorSentence('differential', figures)).toContain('fails at a quarter of the symbol rate: 2\u202F400 Hz here')
    for (const detector of detectors) {
      expect(detectorSentence(detector, { symbolRateHz: null as unknown as number, rolloff: null, bandwidthHz: null, spreadingFactor: null })).not.toMatch(/ here\b|NaN|null Hz/)
    }
  })

  it('moves the end of a quadrature detector with the roll-off', () => {
    expect(detectorSentence('quadrature', { ...figures, rolloff: 0.35 })).toContain('12\u202F960 Hz here')
  })

  it('gives a chirp its limit and its drift within a packet', () => {
    // 125 kHz / 4 and 125 kHz / (3 · 1024) = 40.69 Hz, by hand.
    expect(detectorSentence('chirp', figures)).toMatch(/31\u202F250 Hz here.*40\.7 Hz here/)
  })
})

describe('the detector that a modulation asks for', () => {
  // Common practice of receivers.
  it.each([
    ['GMSK', 'msk'], ['gmsk BT 0.5', 'msk'], ['MSK', 'msk'], ['OQPSK', 'quadrature'], ['Offset QPSK', 'quadrature'], ['SOQPSK', 'quadrature'],
    ['BPSK', 'quadrature'], ['QPSK', 'quadrature'], ['8PSK', 'quadrature'], ['16-APSK', 'quadrature'], ['64-QAM', 'quadrature'],
    ['DBPSK', 'differential'], ['DPSK', 'differential'], ['DQPSK', 'stated'], ['π/4-DQPSK', 'stated'],
    ['2-FSK', 'fsk'], ['FSK', 'fsk'], ['non-coherent 2-FSK', 'fsk'], ['BFSK', 'fsk'],
    ['GFSK', 'stated'], ['AFSK', 'stated'], ['4-FSK', 'stated'], ['4FSK', 'stated'], ['FM', 'stated'], ['FSK, discriminator', 'stated'],
    ['OFDM', 'multicarrier'], ['COFDM', 'multicarrier'], ['chirp spread spectrum', 'chirp'], ['CSS', 'chirp'],
  ] as const)('of %s is %s', (modulation, detector) => {
    expect(proposalFor(modulation)?.detector).toBe(detector)
  })

  it('is none for what it does not know', () => {
    expect(proposalFor('')).toBeNull()
    expect(proposalFor('smoke signals')).toBeNull()
  })

  it('tells that a symbol of OQPSK lasts two bits', () => {
    expect(proposalFor('OQPSK')!.reason).toContain('T = 2 / bit rate')
  })

  it('lets a coherent detector stand where quadrature is usual, and no other', () => {
    expect(isUsual(proposalFor('BPSK')!, 'coherent')).toBe(true)
    expect(isUsual(proposalFor('BPSK')!, 'msk')).toBe(false)
    expect(isUsual(proposalFor('GMSK')!, 'coherent')).toBe(false)
  })

  it('covers every detector but coherent, which reads what quadrature reads', () => {
    expect(new Set(proposals.map(proposal => proposal.detector))).toEqual(new Set(detectors.filter(detector => detector !== 'coherent')))
  })
})
