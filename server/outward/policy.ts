import type { OutwardPolicy } from './outward-address'

const trying = () => process.env.NULLBEAT_TEST === '1' || process.env.NULLBEAT_DEMO === '1'

/** Web hooks go to public addresses by HTTPS. Only the demo and tests can be opened for a receiver on the same machine. */
export const webHookPolicy = (): OutwardPolicy => {
  const open = trying() && process.env.ALLOW_INTERNAL_WEB_HOOKS === '1'
  return { plain: open, internal: open }
}

/** Whoever watches over the server's silence may stand on the operator's own network, where the operator says so. */
export const heartbeatPolicy = (): OutwardPolicy => {
  const open = process.env.ALLOW_INTERNAL_HEARTBEAT === '1'
  return { plain: open, internal: open }
}
