import type { H3Event } from 'h3'
import { getRequestHeader } from 'h3'
import { DomainError } from '~~/server/domain/errors'
import { publicUrl } from './session'

/**
 * A browser says where a request comes from (Origin, Sec-Fetch-Site); what comes from another site may not change
 * anything. A program sends neither header, and no page of another site can make a browser leave them out.
 */
export function requireOwnOrigin(event: H3Event): void {
  const site = getRequestHeader(event, 'sec-fetch-site')
  if (site !== undefined && site !== 'same-origin' && site !== 'none') throw refused()
  const origin = getRequestHeader(event, 'origin')
  if (origin === undefined) return
  const host = getRequestHeader(event, 'host')
  const from = URL.canParse(origin) ? new URL(origin) : null
  if (!from || (from.host !== host && from.origin !== publicUrl().origin)) throw refused()
}

const refused = () => new DomainError('not-allowed', 'A request that changes something must come from the product’s own pages, or from a program with a key.')
