import { blankQuestion } from './question'
import type { BenchQuestion } from './question'

const DAY_MS = 86_400_000

/** Modulo-10 sum of digits, a minus counting one, that ends each line of a two-line set. */
function withChecksum(line: string): string {
  const sum = [...line].reduce((total, character) => total + (character === '-' ? 1 : Number(character) || 0), 0)
  return line + String(sum % 10)
}

/**
 * An invented orbit as a two-line set whose epoch is the given instant: circular, about 550 km up, nearly polar.
 * The number 99990 stands in no catalogue.
 */
export function exampleElements(nowMs: number): string {
  const now = new Date(nowMs)
  const year = now.getUTCFullYear()
  const day = 1 + (nowMs - Date.UTC(year, 0, 1)) / DAY_MS
  // Cut, not rounded: the last instant of a year stays in it.
  const epoch = `${String(year % 100).padStart(2, '0')}${(Math.floor(day * 1e8) / 1e8).toFixed(8).padStart(12, '0')}`
  return [
    'EXAMPLE ORBIT',
    withChecksum(`1 99990U          ${epoch}  .00002000  00000-0  10000-3 0  999`),
    withChecksum('2 99990  97.6000 120.0000 0012000  90.0000 270.0000 15.05000000    1'),
  ].join('\n')
}

/** A whole question that a newcomer can ask at once: the example orbit over an invented place on a northern coast. */
export function exampleQuestion(nowMs: number): BenchQuestion {
  const question = blankQuestion(nowMs)
  return {
    ...question,
    elements: { source: 'given', id: null, text: exampleElements(Math.floor(nowMs / 60_000) * 60_000) },
    station: { ...question.station, source: 'given', latitudeDeg: 60, longitudeDeg: 10, heightM: 120, mask: [{ azimuthDeg: 0, elevationDeg: 3 }, { azimuthDeg: 140, elevationDeg: 15 }, { azimuthDeg: 220, elevationDeg: 6 }] },
    budget: { ...question.budget, clockErrorMs: 10, alongTrackSigmaS: 0.07, spacecraftPpm: 0.3, stationPpm: 0.1, ut1BoundS: 0.05 },
    offsetHz: 1000,
  }
}
