import { describe, expect, it } from 'vitest'
import { routes } from '#shared/routes'
import { routesOf } from '~/utils/developers/routes-of'
import { schemaText } from '~/utils/developers/schema-text'
import { describeInterface } from '~~/server/http/open-api/describe-interface'

// Keywords of JSON Schema 2020-12 and OpenAPI 3.1; how they are put in words is the product's own.
describe('the interface for people', () => {
  it('shows every route of the table once, the station’s first', () => {
    const groups = routesOf(JSON.parse(JSON.stringify(describeInterface({ url: 'https://ops.example', sessionCookieName: 'session' }))))
    expect(groups.flatMap(({ routes }) => routes.map(({ method, path }) => `${method} ${path}`)).sort()).toEqual(Object.keys(routes).sort())
    expect(groups[0]!.tag).toBe('station')
    const all = groups.flatMap(({ routes }) => routes)
    const create = all.find(({ method, path }) => `${method} ${path}` === 'POST /api/stations')!
    expect(create.body).toMatch(/^application\/json\n\{\n {2}name: string \(1 to 80 signs\)/)
    expect(create.body).toContain('latitudeDeg: number (≥ -90, ≤ 90)')
    expect(create.parameters).toContainEqual({ name: 'Idempotency-Key', place: 'header', required: false, type: 'string' })
    expect(create.answers).toContainEqual({ status: '409', what: 'In conflict with the present state', text: null })
    for (const { who, summary } of all) expect(who && summary).not.toBe('')
    expect(JSON.stringify(groups)).not.toContain('undefined')
  })

  it('puts schemas in words that a person reads', () => {
    expect(schemaText({ type: 'object', properties: { at: { type: 'string', format: 'date-time' }, hz: { type: 'number', exclusiveMinimum: 0, description: 'carrier' }, kind: { enum: ['a', 'b'], default: 'a' } }, required: ['at', 'hz'] }))
      .toBe('{\n  at: date-time\n  hz: number (> 0)  — carrier\n  kind?: "a" | "b"  — else "a"\n}')
    expect(schemaText({ type: 'array', items: { anyOf: [{ type: 'string' }, { type: 'null' }] } })).toBe('(string | null)[]')
    expect(schemaText({ anyOf: [{ type: 'array', items: { type: 'object', properties: {} } }, { type: 'null' }] })).toBe('{}[] | null')
    expect(schemaText({ type: 'object', additionalProperties: { type: 'integer', minimum: 1 } })).toBe('{ [name]: integer (≥ 1) }')
    expect(schemaText({})).toBe('any')
  })
})
