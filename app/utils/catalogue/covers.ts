import type { LinkOut } from '#shared/schemas/links'
import type { StationOut } from '#shared/schemas/stations'

/** Names of the stations with a radio that works in the link's direction and whose tuning range holds its carrier. */
export function stationsInRange(link: Pick<LinkOut, 'direction' | 'carrierHz'>, stations: readonly StationOut[]): string[] {
  return stations.filter(station => station.antennas.some(antenna => antenna.radios.some(radio =>
    (link.direction === 'uplink' ? radio.transmits : radio.receives) && radio.tuneLowHz <= link.carrierHz && link.carrierHz <= radio.tuneHighHz,
  ))).map(station => station.name)
}
