import { z } from 'zod'
import { permissions, roleNames } from '#shared/permissions'
import type { Access, RouteSpec } from '#shared/routes'
import type { ErrorCode } from '~~/server/domain/errors'
import { problemResponses } from './problems'

type JsonSchema = Record<string, unknown> & { properties?: Record<string, JsonSchema>, required?: string[] }

/** One operation of OpenAPI 3.1. */
export function describeRoute(method: string, path: string, spec: RouteSpec): Record<string, unknown> {
  const parameters = [
    ...describeParameters('path', spec.params),
    ...describeParameters('query', spec.query),
    ...(spec.creates ? [{ $ref: '#/components/parameters/IdempotencyKey' }] : []),
  ]
  return {
    operationId: operationId(method, path),
    summary: spec.summary,
    description: describeAccess(spec.access),
    tags: [path.split('/').slice(1).at(path.startsWith('/api/') ? 1 : 0)!.replace('.json', '')],
    security: securityOf(spec.access),
    ...(parameters.length > 0 ? { parameters } : {}),
    ...(spec.rawBody ? { requestBody: uploadBody } : spec.body ? { requestBody: describeBody(spec.body) } : {}),
    responses: { ...describeAnswers(path, spec), ...problemResponses(errorsOf(method, path, spec)) },
  }
}

/** getApiTablesId and the like: unique, since method and path are. */
export function operationId(method: string, path: string): string {
  return method.toLowerCase() + path.split(/[^A-Za-z0-9]+/).filter(Boolean).map(word => word.charAt(0).toUpperCase() + word.slice(1)).join('')
}

function toSchema(schema: z.ZodType, io: 'input' | 'output'): JsonSchema {
  const { $schema: _, ...rest } = z.toJSONSchema(schema, { io, target: 'draft-2020-12' }) as JsonSchema
  return rest
}

function describeParameters(place: 'path' | 'query', schema: z.ZodType | undefined): object[] {
  if (!schema) return []
  const { properties = {}, required = [] } = toSchema(schema, 'input')
  return Object.entries(properties).map(([name, property]) => ({ name, in: place, required: place === 'path' || required.includes(name), schema: property }))
}

function describeBody(schema: z.ZodType): object {
  return { required: !schema.safeParse(undefined).success, content: { 'application/json': { schema: toSchema(schema, 'input') } } }
}

const text = { schema: { type: 'string' } }
const uploadBody = {
  required: true,
  content: {
    'multipart/form-data': { schema: { type: 'object', required: ['file'], properties: { file: { type: 'string', contentMediaType: 'application/octet-stream' } } } },
    'text/plain': text,
    'application/json': { schema: {} },
  },
}

function describeAnswers(path: string, spec: RouteSpec): Record<string, object> {
  if (path === '/api/station/v1/tables/{id}') return stationTableAnswers
  if (path === '/metrics') return { 200: { description: 'Prometheus text exposition format 0.0.4', content: { 'text/plain': text } } }
  if (path === '/api/station/v1/calendar.ics' || path === '/api/calendars/{token}') return calendarAnswers
  if (path.startsWith('/api/element-sets/') && path.endsWith('/download')) return elementFileAnswers
  const status = String(spec.status ?? 200)
  const content = spec.response ? { content: { 'application/json': { schema: toSchema(spec.response, 'output') } } } : {}
  const answers: Record<string, object> = { [status]: { description: status === '204' ? 'Done' : status === '201' ? 'Created' : 'As asked', ...content } }
  if (spec.rawBody) answers['202'] = { description: 'Large: being read; the report is at GET …/uploads/{id}', ...content }
  // Not ready is an answer of its own kind, no problem report.
  if (path === '/api/health/ready') answers['503'] = { description: 'Not ready: the checks say what fails', ...content }
  return answers
}

const stationTableAnswers = {
  200: {
    description: 'The newest published revision; sent whole, it counts as collected',
    headers: { ETag: { description: 'Digest and notation', ...text }, Vary: text },
    content: { 'application/json': { schema: { type: 'object' } }, 'text/csv': text, 'text/plain': text },
  },
  304: { description: 'Nothing newer than what If-None-Match names; counts as collected' },
}

const elementFileAnswers = {
  200: {
    description: 'A file in the notation asked for',
    headers: { 'Content-Disposition': { description: 'Names the file', ...text }, 'Rounded-Values': { description: 'Keywords whose values a TLE rounds; absent where none is', ...text } },
    content: { 'text/plain': text, 'application/xml': text, 'application/json': { schema: { type: 'array', items: { type: 'object' } } }, 'text/csv': text },
  },
}

const calendarAnswers = {
  200: { description: 'An event a pass; what is no longer predicted has status CANCELLED', headers: { ETag: { description: 'Of the content', ...text } }, content: { 'text/calendar': text } },
  304: { description: 'Nothing has changed since' },
}

function errorsOf(method: string, path: string, spec: RouteSpec): ErrorCode[] {
  const errors: ErrorCode[] = spec.access.kind === 'public' ? [] : ['not-signed-in', 'not-allowed']
  if (spec.params || path.startsWith('/api/auth/links/') || path === '/api/element-sets/download') errors.push('not-found')
  if (spec.query || spec.body || spec.rawBody) errors.push('not-valid')
  if (spec.body || spec.rawBody) errors.push('unreadable', 'too-large', 'wrong-type')
  if (method !== 'GET') errors.push('conflict')
  if (path === '/api/station/v1/tables/{id}') errors.push('gone')
  if (path === '/api/auth/sign-in') errors.push('not-signed-in')
  if (path.startsWith('/api/auth/') && spec.body) errors.push('too-many')
  if (spec.access.kind !== 'public' || method !== 'GET') errors.push('unavailable')
  return errors
}

function securityOf(access: Access): object[] {
  const session = { session: [] }
  const key = { key: [] }
  if (access.kind === 'public') return []
  if (access.kind === 'person') return [session]
  if (access.kind === 'station-key' || access.kind === 'metrics-key') return [key]
  return access.keys.length > 0 ? [session, key] : [session]
}

function describeAccess(access: Access): string {
  if (access.kind === 'public') return `Anybody. ${access.why}`
  if (access.kind === 'person') return 'Any signed-in person.'
  if (access.kind === 'metrics-key') return 'A key of scope metrics.'
  if (access.kind === 'station-key') return 'A station’s key, for its own station.'
  const roles = `People of the roles ${permissions[access.permission].map(role => roleNames[role].toLowerCase()).join(', ')}`
  return access.keys.length > 0 ? `${roles}; keys of scope ${access.keys.join(', ')}.` : `${roles}.`
}
