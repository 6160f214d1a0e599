/**
 * Who may what, written by hand from the operator's table of roles and scopes; not derived from the product's own table,
 * so that each checks the other. Roles by letter: F flight dynamics, O operator, C on-call engineer, A administrator,
 * R reader. What is open to anybody says so.
 */
export type Scope = 'station' | 'elements:write' | 'read' | 'metrics'
export type Expected = 'anybody' | { roles: string, keys: readonly Scope[] }

const to = (roles: string, ...keys: Scope[]): Expected => ({ roles, keys })
/** Everything but people, keys and audit is read by all, and by keys that read. */
const reading = to('FOCAR', 'read')
/** The bench is for any signed-in person or key. */
const bench = to('FOCAR', 'station', 'elements:write', 'read', 'metrics')
const oneself = to('FOCAR')
const flightDynamics = to('FA')
const linksAndRadios = to('CA')
const administrator = to('A')
const decidingOnTables = to('OA')
const feed = to('', 'station')

export const expectedAccess: Record<string, Expected> = {
  'POST /api/auth/sign-in': 'anybody',
  'POST /api/auth/sign-out': 'anybody',
  'POST /api/auth/links/look': 'anybody',
  'POST /api/auth/links/take-up': 'anybody',
  'GET /api/openapi.json': 'anybody',
  // Who has the address has the calendar.
  'GET /api/calendars/{token}': 'anybody',
  'GET /api/health/live': 'anybody',
  'GET /api/health/ready': 'anybody',

  // For a key of scope metrics only.
  'GET /metrics': to('', 'metrics'),

  'GET /api/auth/me': oneself,
  'PATCH /api/auth/me': oneself,
  'POST /api/auth/password': oneself,
  'GET /api/clock': oneself,
  'GET /api/auth/calendars': oneself,
  'POST /api/auth/calendars': oneself,
  'DELETE /api/auth/calendars/{id}': oneself,

  'POST /api/bench/predict': bench,
  'POST /api/bench/allowance': bench,
  'POST /api/bench/loss': bench,

  // Uploading: everybody but readers, and keys made for it, which may also read the report of what they sent.
  'POST /api/element-sets/uploads': to('FOCA', 'elements:write'),
  'POST /api/element-sets/uploads/{id}/cancel': to('FOCA', 'elements:write'),
  'GET /api/element-sets/uploads/{id}': to('FOCAR', 'read', 'elements:write'),
  'GET /api/element-sets/uploads/{id}/notes': to('FOCAR', 'read', 'elements:write'),
  'GET /api/element-sets/uploads/{id}/report.csv': to('FOCAR', 'read', 'elements:write'),
  'GET /api/element-sets/uploads/{id}/events': to('FOCAR', 'read', 'elements:write'),
  'GET /api/element-sets/uploads': reading,
  'GET /api/element-sets': reading,
  'GET /api/element-sets/{id}': reading,
  'GET /api/element-sets/{id}/download': reading,
  'GET /api/element-sets/download': reading,
  'GET /api/element-sets/{id}/comparison': reading,
  'GET /api/element-sets/{id}/preview': reading,
  'GET /api/element-sets/counts': reading,
  'POST /api/element-sets/assign': flightDynamics,
  'POST /api/element-sets/keep': flightDynamics,
  'POST /api/element-sets/drop': flightDynamics,
  'POST /api/element-sets/reopen': flightDynamics,
  'POST /api/element-sets/{id}/assign': flightDynamics,
  'POST /api/element-sets/{id}/keep': flightDynamics,
  'POST /api/element-sets/{id}/drop': flightDynamics,
  'POST /api/element-sets/{id}/use': flightDynamics,
  'POST /api/element-sets/{id}/refuse': flightDynamics,
  'POST /api/element-sets/{id}/schedule-use': flightDynamics,
  'POST /api/element-sets/{id}/cancel-use': flightDynamics,

  'GET /api/spacecraft': reading,
  'GET /api/spacecraft/{id}': reading,
  'GET /api/spacecraft/{id}/accuracy': reading,
  'GET /api/spacecraft/{id}/manoeuvres': reading,
  'POST /api/spacecraft/{id}/manoeuvres': flightDynamics,
  'POST /api/manoeuvres/{id}/cancel': flightDynamics,
  'POST /api/spacecraft': flightDynamics,
  'PATCH /api/spacecraft/{id}': flightDynamics,
  'DELETE /api/spacecraft/{id}': flightDynamics,

  'GET /api/links': reading,
  'GET /api/links/{id}': reading,
  'POST /api/links': linksAndRadios,
  'PATCH /api/links/{id}': linksAndRadios,
  'DELETE /api/links/{id}': linksAndRadios,
  'GET /api/radios': reading,
  'GET /api/radios/{id}': reading,
  'POST /api/radios': linksAndRadios,
  'PATCH /api/radios/{id}': linksAndRadios,
  'DELETE /api/radios/{id}': linksAndRadios,

  'GET /api/stations': reading,
  'GET /api/stations/{id}': reading,
  'POST /api/stations': administrator,
  'PATCH /api/stations/{id}': administrator,
  'DELETE /api/stations/{id}': administrator,
  'GET /api/publication-rules': reading,
  'POST /api/publication-rules': administrator,
  'DELETE /api/publication-rules/{id}': administrator,
  'GET /api/stations/{id}/calendars': administrator,
  'POST /api/stations/{id}/calendars': administrator,
  'DELETE /api/stations/{id}/calendars/{calendarId}': administrator,
  'POST /api/antennas': administrator,
  'PATCH /api/antennas/{id}': administrator,
  'DELETE /api/antennas/{id}': administrator,

  'GET /api/passes': reading,
  'GET /api/passes/{id}': reading,
  'GET /api/passes/{id}/samples': reading,
  'GET /api/predictions/progress': reading,
  'GET /api/tables': reading,
  'GET /api/tables/{id}': reading,
  // The on-call engineer stands as second person; that it is only as second is decided on the table itself.
  'POST /api/tables/{id}/approve': to('OCA'),
  'POST /api/tables/{id}/hold': decidingOnTables,
  'POST /api/tables/{id}/release': decidingOnTables,
  'POST /api/tables/{id}/publish': decidingOnTables,
  'POST /api/tables/{id}/withdraw': decidingOnTables,

  // Operators decide when a radio is left alone.
  'GET /api/quiet-spans': reading,
  'POST /api/quiet-spans': decidingOnTables,
  'POST /api/quiet-spans/{id}/cancel': decidingOnTables,

  'GET /api/alerts': reading,
  'GET /api/alerts/{id}': reading,
  // The operator for decisions due only; which alert it is, is decided on the alert itself.
  'POST /api/alerts/{id}/acknowledge': to('OCA'),
  'POST /api/alerts/{id}/close': to('OCA'),
  'GET /api/mails': administrator,
  'POST /api/mails/{id}/retry': administrator,
  'GET /api/demo/mail': reading,

  'GET /api/servers': administrator,
  'POST /api/servers/{id}/forget': administrator,
  'GET /api/web-hooks': administrator,
  'POST /api/web-hooks': administrator,
  'PATCH /api/web-hooks/{id}': administrator,
  'DELETE /api/web-hooks/{id}': administrator,
  'POST /api/web-hooks/{id}/test': administrator,
  'GET /api/web-hooks/{id}/deliveries': administrator,
  'POST /api/web-hook-deliveries/{id}/repeat': administrator,

  'GET /api/people': administrator,
  'POST /api/people': administrator,
  'PATCH /api/people/{id}': administrator,
  'POST /api/people/{id}/invite': administrator,
  'GET /api/keys': administrator,
  'POST /api/keys': administrator,
  'DELETE /api/keys/{id}': administrator,
  'GET /api/signing-keys': administrator,
  'POST /api/signing-keys': administrator,
  'GET /api/settings': reading,
  'PATCH /api/settings': administrator,
  'GET /api/slots': reading,
  'GET /api/slots/preview': reading,
  'GET /api/audit': administrator,

  'GET /api/station/v1/tables': feed,
  'GET /api/station/v1/tables/{id}': feed,
  'POST /api/station/v1/tables/{id}/report': feed,
  'GET /api/station/v1/keys': feed,
  'GET /api/station/v1/calendar.ics': feed,
}
