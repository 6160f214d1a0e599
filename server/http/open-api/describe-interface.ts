import { name as product, version } from '~~/package.json'
import { keyScopes } from '#shared/permissions'
import type { RouteSpec } from '#shared/routes'
import { routes } from '#shared/routes'
import { describeRoute } from './describe-route'
import { errorResponses, problemSchema } from './problems'

export interface OpenApiDocument { openapi: string, [field: string]: unknown }

/**
 * The whole interface as OpenAPI 3.1.0 (whose schemas are JSON Schema 2020-12), made of the same table and the same
 * schemas that requests are held against.
 */
export function describeInterface({ url, sessionCookieName }: { url: string, sessionCookieName: string }): OpenApiDocument {
  const paths: Record<string, Record<string, unknown>> = {}
  for (const [name, spec] of Object.entries(routes) as [string, RouteSpec][]) {
    const [method, path] = name.split(' ') as [string, string]
    paths[path] = { ...paths[path], [method.toLowerCase()]: describeRoute(method, path, spec) }
  }
  return {
    openapi: '3.1.0',
    info: {
      title: product.charAt(0).toUpperCase() + product.slice(1),
      version,
      description: 'Element sets in, tuning tables out. SI units, named at the end of every quantity; instants are ISO 8601 in UTC. Tables are advice to licensed operators, who answer for what they radiate.',
    },
    servers: [{ url }],
    paths,
    components: {
      schemas: { Problem: problemSchema },
      responses: errorResponses,
      parameters: {
        IdempotencyKey: { name: 'Idempotency-Key', in: 'header', required: false, description: 'The same key with the same body gives the first answer again; with another body, 409.', schema: { type: 'string', minLength: 1, maxLength: 200 } },
      },
      securitySchemes: {
        session: { type: 'apiKey', in: 'cookie', name: sessionCookieName, description: 'A person’s session, from POST /api/auth/sign-in. A request that changes something comes from the product’s own origin.' },
        key: { type: 'http', scheme: 'bearer', description: `A key, shown once where it is made, of one of the scopes ${keyScopes.join(', ')}.` },
      },
    },
  }
}
