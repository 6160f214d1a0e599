import type { Schema } from './schema-text'
import { schemaText } from './schema-text'

/** What of an OpenAPI 3.1 description the page shows. */
export interface OpenApi {
  paths?: Record<string, Record<string, Operation>>
  components?: { responses?: Record<string, { description: string }> }
}
interface Content { content?: Record<string, { schema?: Schema }> }
interface Operation {
  operationId: string
  summary: string
  description: string
  tags: string[]
  parameters?: { $ref?: string, name?: string, in?: string, required?: boolean, schema?: Schema }[]
  requestBody?: Content & { required?: boolean }
  responses: Record<string, Content & { $ref?: string, description?: string }>
}

export interface ShownRoute {
  id: string
  method: string
  path: string
  summary: string
  who: string
  parameters: { name: string, place: string, required: boolean, type: string }[]
  body: string | null
  answers: { status: string, what: string, text: string | null }[]
}
export interface RouteGroup { tag: string, routes: ShownRoute[] }

const order = ['get', 'post', 'put', 'patch', 'delete']

/** Routes in groups by what they are about: the station's first, then by name. */
export function routesOf(document: OpenApi): RouteGroup[] {
  const groups = new Map<string, ShownRoute[]>()
  for (const [path, item] of Object.entries(document.paths ?? {})) {
    for (const [method, operation] of Object.entries(item).sort(([a], [b]) => order.indexOf(a) - order.indexOf(b))) {
      const tag = operation.tags[0] ?? ''
      groups.set(tag, [...groups.get(tag) ?? [], shown(document, path, method, operation)])
    }
  }
  return [...groups].map(([tag, routes]) => ({ tag, routes })).sort((a, b) => Number(b.tag === 'station') - Number(a.tag === 'station') || a.tag.localeCompare(b.tag))
}

function shown(document: OpenApi, path: string, method: string, operation: Operation): ShownRoute {
  return {
    id: operation.operationId, method: method.toUpperCase(), path, summary: operation.summary, who: operation.description,
    parameters: (operation.parameters ?? []).map(({ $ref, name, in: place, required, schema }) => $ref
      ? { name: 'Idempotency-Key', place: 'header', required: false, type: 'string' }
      : { name: name!, place: place!, required: required ?? false, type: schemaText(schema ?? {}) }),
    body: contentText(operation.requestBody),
    answers: Object.entries(operation.responses).map(([status, { $ref, description, ...answer }]) => ({
      status, what: $ref ? document.components?.responses?.[$ref.split('/').at(-1)!]?.description ?? '' : description ?? '', text: $ref ? null : contentText(answer),
    })),
  }
}

/** The first kind of content in full, the others by name. */
function contentText(given: Content | undefined): string | null {
  const kinds = Object.entries(given?.content ?? {})
  if (kinds.length === 0) return null
  const [[kind, { schema }], ...others] = kinds as [[string, { schema?: Schema }], ...[string, { schema?: Schema }][]]
  return `${kind}${others.length > 0 ? `, or ${others.map(([name]) => name).join(', ')}` : ''}\n${schemaText(schema ?? {})}`
}
