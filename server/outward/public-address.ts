import { BlockList, isIP } from 'node:net'

/**
 * Special-purpose IPv4 blocks that the public internet does not route to a stranger's host: IANA IPv4 Special-Purpose
 * Address Registry (RFC 6890 and its updates), multicast (RFC 5771) and the reserved rest (RFC 1112).
 */
const special4: readonly (readonly [string, number])[] = [
  ['0.0.0.0', 8], ['10.0.0.0', 8], ['100.64.0.0', 10], ['127.0.0.0', 8], ['169.254.0.0', 16], ['172.16.0.0', 12],
  ['192.0.0.0', 24], ['192.0.2.0', 24], ['192.31.196.0', 24], ['192.52.193.0', 24], ['192.88.99.0', 24], ['192.168.0.0', 16], ['192.175.48.0', 24],
  ['198.18.0.0', 15], ['198.51.100.0', 24], ['203.0.113.0', 24], ['224.0.0.0', 4], ['240.0.0.0', 4],
]
/** Inside global unicast: protocol assignments with Teredo and ORCHID, documentation, 6to4 (which holds an IPv4 address), AS112. */
const special6: readonly (readonly [string, number])[] = [
  ['2001::', 23], ['2001:db8::', 32], ['2002::', 16], ['2620:4f:8000::', 48], ['3fff::', 20],
]

const refused4 = new BlockList()
for (const [address, bits] of special4) refused4.addSubnet(address, bits, 'ipv4')
const refused6 = new BlockList()
for (const [address, bits] of special6) refused6.addSubnet(address, bits, 'ipv6')
/** The only IPv6 block given out for global unicast (RFC 4291 §2.4, IANA): unique local, link local, loopback, mapped and translated IPv4 lie outside. */
const unicast6 = new BlockList()
unicast6.addSubnet('2000::', 3, 'ipv6')

/** Whether an address, without brackets, is one that anybody on the internet may be reached at. What is no address is not. */
export function isPublicAddress(address: string): boolean {
  const family = isIP(address)
  if (family === 4) return !refused4.check(address, 'ipv4')
  // With a zone (fe80::1%eth0) it is of this link only.
  return family === 6 && !address.includes('%') && unicast6.check(address, 'ipv6') && !refused6.check(address, 'ipv6')
}
