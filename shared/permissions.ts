/** Who may do what: one table, read by every route on the server and by every page. */

export const roles = ['flight-dynamics', 'operator', 'on-call', 'administrator', 'reader'] as const
export type Role = typeof roles[number]

export const roleNames: Record<Role, string> = {
  'flight-dynamics': 'Flight dynamics',
  'operator': 'Operator',
  'on-call': 'On-call engineer',
  'administrator': 'Administrator',
  'reader': 'Reader',
}

const everyone = roles
const workers = ['flight-dynamics', 'operator', 'on-call', 'administrator'] as const

export const permissions = {
  /** Everything but people, keys and audit; the bench. */
  'read': everyone,
  'elements:upload': workers,
  /** Use, refuse, roll back; spacecraft. */
  'elements:decide': ['flight-dynamics', 'administrator'],
  'spacecraft:edit': ['flight-dynamics', 'administrator'],
  /** Links, radios and their limits. */
  'links:edit': ['on-call', 'administrator'],
  /** Stations, masks, antennas, publication times. */
  'stations:edit': ['administrator'],
  'people:manage': ['administrator'],
  'keys:manage': ['administrator'],
  'settings:edit': ['administrator'],
  'audit:read': ['administrator'],
  /** Approve, hold, release, publish, withdraw. */
  'tables:decide': ['operator', 'administrator'],
  /** Stand as the second person for a table that breaks. */
  'tables:second': ['operator', 'on-call', 'administrator'],
  /** Operators only for decisions that are due: the domain looks at the alert itself. */
  'alerts:act': ['operator', 'on-call', 'administrator'],
  'alerts:act-on-any': ['on-call', 'administrator'],
} as const satisfies Record<string, readonly Role[]>

export type Permission = keyof typeof permissions

export const keyScopes = ['station', 'elements:write', 'read', 'metrics'] as const
export type KeyScope = typeof keyScopes[number]

export function may(held: readonly Role[], permission: Permission): boolean {
  return (permissions[permission] as readonly Role[]).some(role => held.includes(role))
}
