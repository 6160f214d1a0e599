import { z } from 'zod'
import type { KeyScope, Permission } from './permissions'
import * as alerts from './schemas/alerts'
import * as bench from './schemas/bench'
import * as calendars from './schemas/calendars'
import { idParams, listOf, pageQuery } from './schemas/common'
import * as elements from './schemas/elements'
import * as links from './schemas/links'
import * as manoeuvres from './schemas/manoeuvres'
import * as people from './schemas/people'
import * as predictions from './schemas/predictions'
import * as quiet from './schemas/quiet-spans'
import * as servers from './schemas/servers'
import * as settings from './schemas/settings'
import * as spacecraft from './schemas/spacecraft'
import * as feed from './schemas/station-feed'
import * as stations from './schemas/stations'
import * as tables from './schemas/tables'
import * as webHooks from './schemas/web-hooks'

/**
 * Every route of the HTTP interface: who may, what comes in, what goes out. Handlers are written against a line of
 * this table and do not compile without one; the description for programs is made from it; tests walk it.
 */
export type Access =
  | { readonly kind: 'public', readonly why: string }
  | { readonly kind: 'person' }
  | { readonly kind: 'permission', readonly permission: Permission, readonly keys: readonly KeyScope[] }
  | { readonly kind: 'station-key' }
  | { readonly kind: 'metrics-key' }

export interface RouteSpec {
  readonly access: Access
  readonly summary: string
  readonly params?: z.ZodType
  readonly query?: z.ZodType
  readonly body?: z.ZodType
  readonly response?: z.ZodType
  readonly status?: number
  /** A POST that creates: honours Idempotency-Key. */
  readonly creates?: boolean
  /** The handler reads the body itself (uploads). */
  readonly rawBody?: boolean
  /** Largest body, bytes. */
  readonly bodyLimit?: number
}

const open = (why: string): Access => ({ kind: 'public', why })
const person: Access = { kind: 'person' }
const may = (permission: Permission, ...keys: KeyScope[]): Access => ({ kind: 'permission', permission, keys })
const read = may('read', 'read')
/** Keys made for uploading may read what became of an upload. */
const sent = may('read', 'read', 'elements:write')
const station: Access = { kind: 'station-key' }

export const uploadLimitBytes = 50 * 1024 * 1024

export const routes = {
  'POST /api/auth/sign-in': { access: open('Nobody is signed in yet.'), summary: 'Sign in', body: people.signInBody, response: z.object({ user: people.personOut }) },
  'POST /api/auth/sign-out': { access: open('A dead session may sign out too.'), summary: 'Sign out', status: 204 },
  'GET /api/auth/me': { access: person, summary: 'The signed-in person', response: people.personOut },
  'PATCH /api/auth/me': { access: person, summary: 'Change one’s own name or zone', body: people.changeMeBody, response: people.personOut },
  'POST /api/auth/password': { access: person, summary: 'Change one’s own password; ends every other session', body: people.changePasswordBody, status: 204 },
  'GET /api/auth/calendars': { access: person, summary: 'One’s own calendar addresses', response: listOf(calendars.calendarAddressOut) },
  'POST /api/auth/calendars': { access: person, summary: 'Make a calendar address of all stations; shown once', response: calendars.calendarAddressMade, status: 201 },
  'DELETE /api/auth/calendars/{id}': { access: person, summary: 'Revoke one’s own calendar address', params: idParams, status: 204 },
  'POST /api/auth/links/look': { access: open('The address itself is the secret.'), summary: 'What a one-time address is for', body: z.strictObject({ token: z.string().min(20).max(100) }), response: people.linkInfo },
  'POST /api/auth/links/take-up': { access: open('The address itself is the secret.'), summary: 'Set the password of a first administrator or an invited person and sign in', body: people.takeUpLinkBody, response: z.object({ user: people.personOut }) },

  'POST /api/bench/predict': { access: may('read', 'read', 'elements:write', 'station', 'metrics'), summary: 'Passes, samples and a checked table; nothing stored', body: bench.benchPredictBody, response: bench.benchPredictOut, bodyLimit: 1024 * 1024 },
  'POST /api/bench/allowance': { access: may('read', 'read', 'elements:write', 'station', 'metrics'), summary: 'What a link bears', body: bench.benchAllowanceBody, response: bench.benchAllowanceOut },
  'POST /api/bench/loss': { access: may('read', 'read', 'elements:write', 'station', 'metrics'), summary: 'Loss at an offset', body: bench.benchLossBody, response: bench.benchLossOut },

  'POST /api/element-sets/uploads': { access: may('elements:upload', 'elements:write'), summary: 'Upload element sets', rawBody: true, creates: true, response: elements.uploadOut, status: 201, bodyLimit: uploadLimitBytes },
  'GET /api/element-sets/uploads': { access: read, summary: 'Uploads, newest first', query: elements.uploadsQuery, response: listOf(elements.uploadBrief) },
  'GET /api/element-sets/uploads/{id}': { access: sent, summary: 'One upload and its report', params: idParams, response: elements.uploadOut },
  'GET /api/element-sets/uploads/{id}/notes': { access: sent, summary: 'Refusals or warnings of an upload, by line', params: idParams, query: elements.uploadNotesQuery, response: listOf(elements.noteOut) },
  'GET /api/element-sets/uploads/{id}/report.csv': { access: sent, summary: 'The whole report of an upload, line by line, as CSV', params: idParams },
  'GET /api/element-sets/uploads/{id}/events': { access: sent, summary: 'State and counts of an upload as they change, as server-sent events of the name upload, until it has ended', params: idParams },
  'POST /api/element-sets/uploads/{id}/cancel': { access: may('elements:upload', 'elements:write'), summary: 'Give an upload up that is not finished; nothing of it is stored', params: idParams, response: elements.uploadOut },
  'GET /api/element-sets': { access: read, summary: 'Element sets, newest epoch first', query: elements.elementSetsQuery, response: listOf(elements.elementSetOut) },
  'GET /api/element-sets/counts': { access: read, summary: 'How many sets wait, and how many of no spacecraft stand where', response: elements.setCounts },
  'POST /api/element-sets/assign': { access: may('elements:decide'), summary: 'Give sets to a spacecraft; all or none', body: elements.assignSetsBody, response: elements.changedOut },
  'POST /api/element-sets/keep': { access: may('elements:decide'), summary: 'Keep sets of no spacecraft', body: elements.whichUnassigned, response: elements.changedOut },
  'POST /api/element-sets/drop': { access: may('elements:decide'), summary: 'Drop sets of no spacecraft', body: elements.whichUnassigned, response: elements.changedOut },
  'POST /api/element-sets/reopen': { access: may('elements:decide'), summary: 'Put kept or dropped sets of no spacecraft back to be decided on', body: elements.whichUnassigned, response: elements.changedOut },
  'GET /api/element-sets/{id}': { access: read, summary: 'One element set', params: idParams, response: elements.elementSetOut },
  'GET /api/element-sets/download': { access: read, summary: 'Up to 100 element sets as one file, in the order asked for', query: elements.downloadSetsQuery },
  'GET /api/element-sets/{id}/download': { access: read, summary: 'One element set as a file: TLE, or OMM as KVN, XML, JSON or CSV', params: idParams, query: elements.downloadQuery },
  'GET /api/element-sets/{id}/comparison': { access: read, summary: 'Shift of prediction against the set in use', params: idParams, response: elements.comparisonOut },
  'GET /api/element-sets/{id}/preview': { access: read, summary: 'What putting it into use would do to tables; for one that is or was in use, what it did', params: idParams, response: elements.previewOut },
  'POST /api/element-sets/{id}/use': { access: may('elements:decide'), summary: 'Put into use; a past set: roll back', params: idParams, response: elements.elementSetOut },
  'POST /api/element-sets/{id}/schedule-use': { access: may('elements:decide'), summary: 'Put into use at an instant', params: idParams, body: elements.scheduleUseBody, response: elements.elementSetOut },
  'POST /api/element-sets/{id}/cancel-use': { access: may('elements:decide'), summary: 'Take back what was scheduled', params: idParams, response: elements.elementSetOut },
  'POST /api/element-sets/{id}/assign': { access: may('elements:decide'), summary: 'Give a set to a spacecraft, for which it waits then', params: idParams, body: elements.assignSetBody, response: elements.elementSetOut },
  'POST /api/element-sets/{id}/keep': { access: may('elements:decide'), summary: 'Keep a set of no spacecraft', params: idParams, response: elements.elementSetOut },
  'POST /api/element-sets/{id}/drop': { access: may('elements:decide'), summary: 'Drop a set of no spacecraft', params: idParams, response: elements.elementSetOut },
  'POST /api/element-sets/{id}/refuse': { access: may('elements:decide'), summary: 'Refuse a waiting set', params: idParams, body: elements.refuseSetBody, response: elements.elementSetOut },

  'GET /api/spacecraft': { access: read, summary: 'Spacecraft', query: pageQuery, response: listOf(spacecraft.spacecraftOut) },
  'POST /api/spacecraft': { access: may('spacecraft:edit'), summary: 'Create a spacecraft', body: spacecraft.createSpacecraftBody, response: spacecraft.spacecraftOut, status: 201, creates: true },
  'GET /api/spacecraft/{id}': { access: read, summary: 'One spacecraft', params: idParams, response: spacecraft.spacecraftOut },
  'GET /api/spacecraft/{id}/accuracy': { access: read, summary: 'How fast its element sets go wrong, and from what that is known', params: idParams, query: spacecraft.accuracyQuery, response: spacecraft.accuracyOut },
  'GET /api/spacecraft/{id}/manoeuvres': { access: read, summary: 'Manoeuvres entered by hand, the latest first', params: idParams, query: pageQuery, response: listOf(manoeuvres.manoeuvreOut) },
  'POST /api/spacecraft/{id}/manoeuvres': { access: may('spacecraft:edit'), summary: 'Enter a manoeuvre: budgets are wider until a set from after it is in use', params: idParams, body: manoeuvres.addManoeuvreBody, response: manoeuvres.manoeuvreOut, status: 201, creates: true },
  'POST /api/manoeuvres/{id}/cancel': { access: may('spacecraft:edit'), summary: 'Cancel a manoeuvre; it stays on record', params: idParams, response: manoeuvres.manoeuvreOut },
  'PATCH /api/spacecraft/{id}': { access: may('spacecraft:edit'), summary: 'Change a spacecraft', params: idParams, body: spacecraft.changeSpacecraftBody, response: spacecraft.spacecraftOut },
  'DELETE /api/spacecraft/{id}': { access: may('spacecraft:edit'), summary: 'Retire a spacecraft with its links; its coming passes are taken back', params: idParams, status: 204 },

  'GET /api/links': { access: read, summary: 'Links', query: pageQuery.extend({ spacecraftId: z.uuid().optional() }), response: listOf(links.linkOut) },
  'POST /api/links': { access: may('links:edit'), summary: 'Create a link', body: links.createLinkBody, response: links.linkOut, status: 201, creates: true },
  'GET /api/links/{id}': { access: read, summary: 'One link', params: idParams, response: links.linkOut },
  'PATCH /api/links/{id}': { access: may('links:edit'), summary: 'Change a link; loosening a limit needs a reason', params: idParams, body: links.changeLinkBody, response: links.linkOut },
  'DELETE /api/links/{id}': { access: may('links:edit'), summary: 'Retire a link; its coming tables are taken back', params: idParams, status: 204 },

  'GET /api/stations': { access: read, summary: 'Stations with antennas and radios', query: pageQuery, response: listOf(stations.stationOut) },
  'POST /api/stations': { access: may('stations:edit'), summary: 'Create a station', body: stations.createStationBody, response: stations.stationOut, status: 201, creates: true },
  'GET /api/stations/{id}': { access: read, summary: 'One station', params: idParams, response: stations.stationOut },
  'PATCH /api/stations/{id}': { access: may('stations:edit'), summary: 'Change a station', params: idParams, body: stations.changeStationBody, response: stations.stationOut },
  'DELETE /api/stations/{id}': { access: may('stations:edit'), summary: 'Retire a station with its antennas and radios; its coming passes are taken back and its keys stop working', params: idParams, status: 204 },
  'GET /api/publication-rules': { access: read, summary: 'Links with publication times of their own at a station', query: stations.publicationRulesQuery, response: z.object({ items: z.array(stations.publicationRuleOut) }) },
  'POST /api/publication-rules': { access: may('stations:edit'), summary: 'Give a link its own times at a station, in place of those it had', body: stations.setPublicationRuleBody, response: stations.publicationRuleOut },
  'DELETE /api/publication-rules/{id}': { access: may('stations:edit'), summary: 'Let a link follow its station’s times again', params: idParams, status: 204 },
  'GET /api/stations/{id}/calendars': { access: may('stations:edit'), summary: 'Calendar addresses of a station', params: idParams, response: listOf(calendars.calendarAddressOut) },
  'POST /api/stations/{id}/calendars': { access: may('stations:edit'), summary: 'Make a calendar address of a station; shown once', params: idParams, response: calendars.calendarAddressMade, status: 201 },
  'DELETE /api/stations/{id}/calendars/{calendarId}': { access: may('stations:edit'), summary: 'Revoke a station’s calendar address', params: calendars.stationCalendarParams, status: 204 },
  'POST /api/antennas': { access: may('stations:edit'), summary: 'Create an antenna', body: stations.createAntennaBody, response: stations.antennaOut, status: 201, creates: true },
  'PATCH /api/antennas/{id}': { access: may('stations:edit'), summary: 'Change an antenna', params: idParams, body: stations.changeAntennaBody, response: stations.antennaOut },
  'DELETE /api/antennas/{id}': { access: may('stations:edit'), summary: 'Retire an antenna with its radios; the station’s tables are computed anew', params: idParams, status: 204 },
  'GET /api/radios': { access: read, summary: 'Radios', query: pageQuery, response: listOf(stations.radioOut) },
  'POST /api/radios': { access: may('links:edit'), summary: 'Create a radio', body: stations.createRadioBody, response: stations.radioOut, status: 201, creates: true },
  'GET /api/radios/{id}': { access: read, summary: 'One radio', params: idParams, response: stations.radioOut },
  'PATCH /api/radios/{id}': { access: may('links:edit'), summary: 'Change a radio', params: idParams, body: stations.changeRadioBody, response: stations.radioOut },
  'DELETE /api/radios/{id}': { access: may('links:edit'), summary: 'Retire a radio; the station’s tables are computed anew', params: idParams, status: 204 },

  'GET /api/passes': { access: read, summary: 'Predicted passes by AOS', query: tables.passesQuery, response: listOf(tables.passOut) },
  'GET /api/passes/{id}': { access: read, summary: 'One pass', params: idParams, response: tables.passOut },
  'GET /api/passes/{id}/samples': { access: read, summary: 'Curves of a pass', params: idParams, query: tables.samplesQuery, response: tables.passSamplesOut },
  'GET /api/predictions/progress': { access: read, summary: 'How much of passes and tables waits to be computed', response: predictions.progressOut },
  'GET /api/tables': { access: read, summary: 'Tuning tables by AOS', query: tables.tablesQuery, response: listOf(tables.tableBrief) },
  'GET /api/tables/{id}': { access: read, summary: 'One tuning table with its retunes', params: idParams, response: tables.tableOut },
  'POST /api/tables/{id}/approve': { access: may('tables:second'), summary: 'Approve; a second person for one that breaks', params: idParams, body: tables.decideBody, response: tables.tableBrief },
  'POST /api/tables/{id}/hold': { access: may('tables:decide'), summary: 'Hold, with a reason', params: idParams, body: tables.holdBody, response: tables.tableBrief },
  'POST /api/tables/{id}/release': { access: may('tables:decide'), summary: 'Release a held table', params: idParams, body: tables.decideBody, response: tables.tableBrief },
  'POST /api/tables/{id}/publish': { access: may('tables:decide'), summary: 'Publish now', params: idParams, body: tables.decideBody, response: tables.tableBrief },
  'POST /api/tables/{id}/withdraw': { access: may('tables:decide'), summary: 'Withdraw what is published, with a reason', params: idParams, body: tables.withdrawBody, response: tables.tableBrief },

  'GET /api/quiet-spans': { access: read, summary: 'Spans in which no retune takes effect, the latest first', query: quiet.quietSpansQuery, response: listOf(quiet.quietSpanOut) },
  'POST /api/quiet-spans': { access: may('tables:decide'), summary: 'Enter a quiet span; the tables it concerns are planned around it', body: quiet.createQuietSpanBody, response: quiet.quietSpanOut, status: 201, creates: true },
  'POST /api/quiet-spans/{id}/cancel': { access: may('tables:decide'), summary: 'Cancel a quiet span that has not ended', params: idParams, body: quiet.cancelQuietSpanBody, response: quiet.quietSpanOut },

  'GET /api/alerts': { access: read, summary: 'Alerts', query: alerts.alertsQuery, response: listOf(alerts.alertOut) },
  'GET /api/alerts/{id}': { access: read, summary: 'One alert', params: idParams, response: alerts.alertOut },
  'POST /api/alerts/{id}/acknowledge': { access: may('alerts:act'), summary: 'Acknowledge', params: idParams, response: alerts.alertOut },
  'POST /api/alerts/{id}/close': { access: may('alerts:act'), summary: 'Close', params: idParams, body: alerts.closeAlertBody, response: alerts.alertOut },
  'GET /api/mails': { access: may('settings:edit'), summary: 'Mail sent, waiting and failed', query: pageQuery, response: listOf(alerts.mailOut) },
  'POST /api/mails/{id}/retry': { access: may('settings:edit'), summary: 'Try a failed mail again', params: idParams, response: alerts.mailOut },
  'GET /api/demo/mail': { access: read, summary: 'What the local SMTP server received', query: pageQuery, response: listOf(alerts.receivedMailOut) },

  'GET /api/servers': { access: may('settings:edit'), summary: 'Servers and workers on this database', response: servers.serversOut },
  'POST /api/servers/{id}/forget': { access: may('settings:edit'), summary: 'Count a silent process as stopped', params: idParams, status: 204 },

  'GET /api/web-hooks': { access: may('settings:edit'), summary: 'Web hooks, newest first', query: pageQuery, response: listOf(webHooks.webHookOut) },
  'POST /api/web-hooks': { access: may('settings:edit'), summary: 'Make a web hook; its secret is shown once', body: webHooks.createWebHookBody, response: webHooks.webHookCreated, status: 201 },
  'PATCH /api/web-hooks/{id}': { access: may('settings:edit'), summary: 'Change a web hook; switch it off or on', params: idParams, body: webHooks.changeWebHookBody, response: webHooks.webHookOut },
  'DELETE /api/web-hooks/{id}': { access: may('settings:edit'), summary: 'Retire a web hook', params: idParams, status: 204 },
  'POST /api/web-hooks/{id}/test': { access: may('settings:edit'), summary: 'Send a message that is only a test', params: idParams, response: webHooks.deliveryOut },
  'GET /api/web-hooks/{id}/deliveries': { access: may('settings:edit'), summary: 'What a web hook was told, newest first', params: idParams, query: pageQuery, response: listOf(webHooks.deliveryOut) },
  'POST /api/web-hook-deliveries/{id}/repeat': { access: may('settings:edit'), summary: 'Send a message once more', params: idParams, response: webHooks.deliveryOut },

  'GET /api/people': { access: may('people:manage'), summary: 'People', query: pageQuery, response: listOf(people.personListed) },
  'POST /api/people': { access: may('people:manage'), summary: 'Invite a person', body: people.invitePersonBody, response: people.personListed, status: 201, creates: true },
  'PATCH /api/people/{id}': { access: may('people:manage'), summary: 'Change roles, disable; ends sessions', params: idParams, body: people.changePersonBody, response: people.personListed },
  'POST /api/people/{id}/invite': { access: may('people:manage'), summary: 'Send a new one-time address', params: idParams, status: 204 },
  'GET /api/keys': { access: may('keys:manage'), summary: 'Keys', query: pageQuery, response: listOf(people.keyOut) },
  'POST /api/keys': { access: may('keys:manage'), summary: 'Make a key; shown once', body: people.createKeyBody, response: people.keyCreated, status: 201 },
  'DELETE /api/keys/{id}': { access: may('keys:manage'), summary: 'Revoke a key', params: idParams, status: 204 },
  'GET /api/signing-keys': { access: may('keys:manage'), summary: 'Keys that sign tables', response: listOf(feed.signingKeyOut) },
  'POST /api/signing-keys': { access: may('keys:manage'), summary: 'Make a new signing key; the one before signs no more', response: feed.signingKeyOut, status: 201 },
  'GET /api/settings': { access: read, summary: 'Settings', response: settings.settingsOut },
  'PATCH /api/settings': { access: may('settings:edit'), summary: 'Change settings', body: settings.changeSettingsBody, response: settings.settingsOut },
  'GET /api/slots': { access: read, summary: 'What the schedule did and will do', response: settings.slotsOut },
  'GET /api/slots/preview': { access: read, summary: 'What times of a station or of a link there would lead to', query: settings.previewSlotsQuery, response: settings.previewSlotsOut },
  'GET /api/audit': { access: may('audit:read'), summary: 'The trail', query: pageQuery.extend({ entityKind: z.string().max(40).optional(), entityId: z.string().max(80).optional() }), response: listOf(people.auditOut) },
  'GET /api/clock': { access: person, summary: 'The server’s time', response: z.object({ now: z.string() }) },

  'GET /api/station/v1/tables': { access: station, summary: 'Published tables of the key’s station', query: feed.feedQuery, response: feed.feedListOut },
  'GET /api/station/v1/tables/{id}': { access: station, summary: 'The newest published revision, as JSON, CSV or CCSDS TDM', params: idParams },
  'POST /api/station/v1/tables/{id}/report': { access: station, summary: 'What the station did with a revision', params: idParams, body: feed.reportBody, status: 204 },
  'GET /api/station/v1/keys': { access: station, summary: 'Public keys that signatures verify with', response: feed.jwkSetOut },

  'GET /api/station/v1/calendar.ics': { access: station, summary: 'The station’s passes as a calendar (RFC 5545)' },
  'GET /api/calendars/{token}': { access: open('The address itself is the secret.'), summary: 'Passes as a calendar (RFC 5545), by private address', params: calendars.calendarTokenParams },

  'GET /api/openapi.json': { access: open('The description holds no data.'), summary: 'This description', response: z.looseObject({ openapi: z.string() }) },
  'GET /metrics': { access: { kind: 'metrics-key' }, summary: 'Measurements of the server as Prometheus text' },
  'GET /api/health/live': { access: open('Asked by process supervisors.'), summary: 'The process answers', response: z.object({ status: z.literal('live') }) },
  'GET /api/health/ready': { access: open('Asked by process supervisors.'), summary: 'Database, migrations, scheduler', response: z.object({ status: z.enum(['ready', 'not-ready']), checks: z.record(z.string(), z.string()) }) },
} as const satisfies Record<string, RouteSpec>

export type RouteName = keyof typeof routes
export type Routes = typeof routes
type OutOf<S> = S extends z.ZodType ? z.output<S> : undefined
export type RouteParams<R extends RouteName> = Routes[R] extends { params: infer S } ? OutOf<S> : undefined
export type RouteQuery<R extends RouteName> = Routes[R] extends { query: infer S } ? OutOf<S> : undefined
export type RouteBody<R extends RouteName> = Routes[R] extends { body: infer S } ? OutOf<S> : undefined
/** As a caller writes it, before defaults. */
export type RouteBodyIn<R extends RouteName> = Routes[R] extends { body: infer S } ? (S extends z.ZodType ? z.input<S> : undefined) : undefined
export type RouteAnswer<R extends RouteName> = Routes[R] extends { response: infer S } ? OutOf<S> : undefined
