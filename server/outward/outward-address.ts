import { lookup } from 'node:dns/promises'
import { isIP } from 'node:net'
import { isPublicAddress } from './public-address'

export interface ResolvedAddress { address: string, family: number }
export type Resolve = (hostname: string) => Promise<ResolvedAddress[]>
export const resolveBySystem: Resolve = hostname => lookup(hostname, { all: true, verbatim: true })

/** What an operator has opened on purpose. */
export interface OutwardPolicy { plain: boolean, internal: boolean }
export const publicOnly: OutwardPolicy = { plain: false, internal: false }

/** Why the product does not call an address, in words for whoever entered it. */
export class AddressRefused extends Error {}

/** What is wrong with an address by its text alone; null: nothing. */
export function addressFault(text: string, { plain, internal }: OutwardPolicy): string | null {
  if (!URL.canParse(text)) return 'Write the whole address, such as https://ops.example/told.'
  const url = new URL(text)
  if (url.protocol !== 'https:' && !(plain && url.protocol === 'http:')) return 'Give an address that begins with https://.'
  if (url.username || url.password) return 'An address with a name and password in it is not called: who receives a message knows it by its signature.'
  if (url.hash) return 'Leave out what follows #: it is never sent.'
  const host = hostOf(url)
  if (!internal && isIP(host) && !isPublicAddress(host)) return `${host} is not a public address.`
  if (!internal && !isIP(host) && !host.replace(/\.$/, '').includes('.')) return `${host} is not a public name.`
  return null
}

/** Without the brackets of IPv6. */
export const hostOf = (url: URL) => url.hostname.replace(/^\[|\]$/g, '')

/**
 * Resolves an address's host once. The connection is made to what is given here and to nothing else, so that a name
 * whose answer changes in between leads nowhere. A name with even one address that is not public is refused.
 * @throws AddressRefused
 */
export async function resolveOutward(text: string, policy: OutwardPolicy, resolve: Resolve = resolveBySystem): Promise<{ url: URL, target: ResolvedAddress }> {
  const fault = addressFault(text, policy)
  if (fault) throw new AddressRefused(fault)
  const url = new URL(text)
  const host = hostOf(url)
  const found = isIP(host) ? [{ address: host, family: isIP(host) }] : await resolve(host)
  if (found.length === 0) throw new AddressRefused(`${host} has no address.`)
  const inside = policy.internal ? undefined : found.find(({ address }) => !isPublicAddress(address))
  if (inside) throw new AddressRefused(`${host} resolves to ${inside.address}, which is not a public address.`)
  return { url, target: found[0]! }
}
