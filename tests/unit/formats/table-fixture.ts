import type { ServedTable } from '#shared/formats/published-table'
import { cautionFor } from '#shared/formats/cautions'

/** An invented table of two retunes. */
export const servedTable = (changes: Partial<ServedTable> = {}): ServedTable => ({
  id: 'table-1', revision: 3, publishedAt: '2026-11-30T07:00:00.000Z',
  pass: { id: 'pass-1', spacecraft: { id: 'craft-1', name: 'Petrel "A", first', catalogueNumber: '90001' }, station: { id: 'station-1', name: '=Cove+1' }, aos: '2026-12-01T03:12:45.123Z', culmination: '2026-12-01T03:17:00.000Z', los: '2026-12-01T03:22:10.500Z', maxElevationDeg: 41.25 },
  link: { id: 'link-1', name: '-command', direction: 'uplink', carrierHz: 437_500_000, symbolRateHz: 9600, bandLowHz: 437_480_000, bandHighHz: 437_520_000 },
  radio: { id: 'radio-1', name: 'Bench\r\nradio', stepHz: 10, offsetHz: 0, minDwellS: 1, latencyMs: 50 },
  verdict: 'tight', allowanceHz: 2400, limitedBy: 'loss', worstResidualHz: 2001.5, worstAt: '2026-12-01T03:17:00.000Z', margin: 1.199,
  budget: { stepsHz: 5, timingHz: 1e-7, ut1Hz: 0, orbitHz: 12.5, oscillatorHz: 300, trimHz: 0 }, symbolClockPpm: { min: -23.1, max: 23.4 },
  elementSet: { id: 'set-1', epoch: '2026-11-30T12:17:46.665888Z', sha256: 'a'.repeat(64) }, supersedes: { revision: 2, reason: 'A newer element set moved the residual by 800 Hz.' },
  retunes: [
    { at: '2026-12-01T03:12:45.073Z', frequencyHz: 437_490_210, slopeHzPerS: 0, dopplerHz: -9790.123, rangeRateMps: -6709.1, azimuthDeg: 12.5, elevationDeg: 5, residualMinHz: -1200, residualMaxHz: 1199.5, lossDb: 0.21 },
    { at: '2026-12-01T03:17:00.000Z', frequencyHz: 437_500_000, slopeHzPerS: 0, dopplerHz: 0, rangeRateMps: 0, azimuthDeg: 101.5, elevationDeg: 41.25, residualMinHz: -1e-7, residualMaxHz: 2001.5, lossDb: null },
  ],
  caution: cautionFor('uplink'), digest: 'b'.repeat(64), signature: 'eyJhbGciOiJFZERTQSJ9..c2lnbmF0dXJl', ...changes,
})
