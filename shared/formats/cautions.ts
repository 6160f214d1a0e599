import type { Direction } from '../physics/types'

const CAUTIONS: Readonly<Record<Direction, string>> = {
  uplink: 'Transmitting needs a licence and a coordinated frequency. This table is advice to licensed operators, who answer for what they radiate. The station\'s own interlocks and local rules come first.',
  downlink: 'This table is advice to the station\'s operators. The station\'s own interlocks and local rules come first.',
}

/** The caution that every published table carries. */
export function cautionFor(direction: Direction): string {
  return CAUTIONS[direction]
}
