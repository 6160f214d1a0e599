import type { Resolve, OutwardPolicy } from '~~/server/outward/outward-address'
import { AddressRefused, resolveOutward } from '~~/server/outward/outward-address'
import { DomainError } from '../errors'

/**
 * An address that is entered is tried at once, so that a mistake shows while somebody looks. It is judged again at
 * every call: a name may point elsewhere by then.
 * @throws DomainError not-valid at `field`
 */
export async function requireOutward(address: string, field: string, policy: OutwardPolicy, resolve?: Resolve): Promise<void> {
  try {
    await resolveOutward(address, policy, resolve)
  }
  catch (error) {
    const message = error instanceof AddressRefused ? error.message : 'This name cannot be resolved: check its spelling.'
    throw new DomainError('not-valid', `${field}: ${message}`, [{ path: field, message }])
  }
}
