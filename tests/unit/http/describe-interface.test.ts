import { describe, expect, it } from 'vitest'
import { routes } from '#shared/routes'
import type { RouteSpec } from '#shared/routes'
import { describeInterface } from '~~/server/http/open-api/describe-interface'

/** The shape is checked against the OpenAPI Specification 3.1.0 (sections named) and JSON Schema 2020-12. */
const document = JSON.parse(JSON.stringify(describeInterface({ url: 'https://ops.example', sessionCookieName: '__Host-nullbeat' }))) as Record<string, unknown>
interface Operation {
  operationId: string
  summary: string
  security: Record<string, string[]>[]
  parameters?: { $ref?: string, name?: string, in?: string, required?: boolean, schema?: object }[]
  requestBody?: { required: boolean, content: Record<string, { schema: object }> }
  responses: Record<string, { $ref?: string, description?: string, content?: Record<string, { schema: object }> }>
}
const paths = document.paths as Record<string, Record<string, Operation>>
const operations = Object.entries(paths).flatMap(([path, item]) => Object.entries(item).map(([method, operation]) => ({ name: `${method.toUpperCase()} ${path}`, path, operation })))
const operationOf = (name: string) => operations.find(operation => operation.name === name)!.operation

/** Every value in the document under its JSON pointer's steps. */
function* walk(value: unknown): Generator<Record<string, unknown>> {
  if (typeof value !== 'object' || value === null) return
  yield value as Record<string, unknown>
  for (const inner of Object.values(value)) yield* walk(inner)
}
const resolve = (pointer: string) => pointer.slice(2).split('/').reduce<unknown>((at, step) => (at as Record<string, unknown> | undefined)?.[step.replaceAll('~1', '/').replaceAll('~0', '~')], document)

describe('the description of the interface', () => {
  it('has every route of the table, and no other', () => {
    expect(operations.map(operation => operation.name).sort()).toEqual(Object.keys(routes).sort())
  })

  it('states the version, a title and where the server is (4.8.1, 4.8.2, 4.8.5)', () => {
    expect(document).toMatchObject({ openapi: '3.1.0', info: { title: 'Nullbeat', version: expect.stringMatching(/^\d+\.\d+\.\d+$/) }, servers: [{ url: 'https://ops.example' }] })
  })

  it('names each operation once and answers each with at least one success (4.8.10, 4.8.16)', () => {
    expect(new Set(operations.map(({ operation }) => operation.operationId)).size).toBe(operations.length)
    for (const { name, operation } of operations) {
      expect(Object.keys(operation.responses).some(status => /^2\d\d$/.test(status)), name).toBe(true)
      for (const [status, response] of Object.entries(operation.responses)) {
        expect(status, name).toMatch(/^[2-5]\d\d$/)
        expect(response.$ref ?? response.description, `${name} ${status}`).toBeTypeOf('string')
      }
    }
  })

  it('gives each place in a path exactly its required parameter (4.8.12.2)', () => {
    for (const { name, path, operation } of operations) {
      const given = (operation.parameters ?? []).filter(parameter => parameter.in === 'path')
      expect(given.map(parameter => parameter.name).sort(), name).toEqual([...path.matchAll(/\{(\w+)\}/g)].map(match => match[1]).sort())
      for (const parameter of given) expect(parameter.required, name).toBe(true)
      for (const parameter of operation.parameters ?? []) if (!parameter.$ref) expect(parameter.schema, `${name} ${parameter.name}`).toBeTypeOf('object')
    }
  })

  it('refers to nothing that is not in it', () => {
    const references = [...walk(document)].flatMap(object => typeof object.$ref === 'string' ? [object.$ref] : [])
    expect(references.length).toBeGreaterThan(100)
    for (const reference of references) {
      expect(reference).toMatch(/^#\//)
      expect(resolve(reference), reference).toBeTypeOf('object')
    }
  })

  it('names only security schemes that it explains, and none where anybody may (4.8.30)', () => {
    const schemes = Object.keys((document.components as { securitySchemes: object }).securitySchemes)
    for (const { name, operation } of operations) {
      for (const requirement of operation.security) for (const scheme of Object.keys(requirement)) expect(schemes, name).toContain(scheme)
    }
    expect(operationOf('POST /api/auth/sign-in').security).toEqual([])
    expect(operationOf('GET /api/auth/me').security).toEqual([{ session: [] }])
    expect(operationOf('GET /api/tables').security).toEqual([{ session: [] }, { key: [] }])
    expect(operationOf('GET /api/station/v1/tables').security).toEqual([{ key: [] }])
  })

  it('writes schemas of JSON Schema’s types only, with bodies as they are sent and answers as they come', () => {
    const types = new Set(['object', 'array', 'string', 'number', 'integer', 'boolean', 'null'])
    for (const object of walk(document)) {
      if (typeof object.type === 'string' && !('in' in object) && !('scheme' in object)) expect(types, JSON.stringify(object).slice(0, 200)).toContain(object.type)
      if (Array.isArray(object.required)) expect(new Set(object.required).size).toBe(object.required.length)
    }
    const body = operationOf('POST /api/stations').requestBody!
    expect(body).toMatchObject({ required: true, content: { 'application/json': { schema: { required: ['name', 'latitudeDeg', 'longitudeDeg', 'heightM', 'zone'], additionalProperties: false, properties: { latitudeDeg: { type: 'number', minimum: -90, maximum: 90 } } } } } })
    expect(operationOf('GET /api/spacecraft').responses['200']).toMatchObject({ content: { 'application/json': { schema: { type: 'object', required: ['items', 'nextCursor'] } } } })
    expect(operationOf('POST /api/tables/{id}/approve').requestBody!.required).toBe(false)
  })

  it('answers what goes wrong as problem+json (RFC 9457)', () => {
    for (const { name, operation } of operations) {
      for (const [status, response] of Object.entries(operation.responses)) {
        if (Number(status) < 400 || name === 'GET /api/health/ready') continue
        expect(Object.keys((resolve(response.$ref!) as { content: object }).content), `${name} ${status}`).toEqual(['application/problem+json'])
      }
    }
    expect(Object.keys(operationOf('PATCH /api/links/{id}').responses)).toEqual(expect.arrayContaining(['400', '401', '403', '404', '409', '413', '415', '422', '503']))
  })

  it('offers the Idempotency-Key where it is honoured, and only there', () => {
    for (const { name, operation } of operations) {
      const spec = (routes as Record<string, RouteSpec>)[name]!
      expect((operation.parameters ?? []).some(parameter => parameter.$ref === '#/components/parameters/IdempotencyKey'), name).toBe(spec.creates === true)
    }
  })
})
