import { describe, expect, it } from 'vitest'
import { routes } from '#shared/routes'
import type { RouteSpec } from '#shared/routes'
import { sourceFiles } from '../support/source-files'

/** The route that a file's place stands for: server/api/tables/[id]/hold.post.ts is POST /api/tables/{id}/hold. */
function routeOf(path: string): string {
  const parts = /^server\/(?:routes\/(?!api\/)|(?=api\/))(.+)\.(get|post|put|patch|delete)\.ts$/.exec(path)
  if (!parts) return `${path} names no method: end it with .get.ts, .post.ts, .patch.ts or .delete.ts`
  return `${parts[2]!.toUpperCase()} /${parts[1]!.replace(/\/index$/, '').replace(/\[(\w+)\]/g, '{$1}')}`
}

const handlers = [...sourceFiles('server/api'), ...sourceFiles('server/routes')]

/** The names that a file hands to defineRoute, in place or by a constant of its own. */
function definedRoutes(text: string): (string | undefined)[] {
  return [...text.matchAll(/\bdefineRoute\(\s*(?:'([^']+)'|(\w+))/g)].map(([, name, constant]) => name ?? new RegExp(`^const ${constant} = '([^']+)'$`, 'm').exec(text)?.[1])
}

describe('the route table', () => {
  it('has a line for every handler, and a handler for every line: write both or neither', () => {
    expect(handlers.map(handler => routeOf(handler.path)).sort()).toEqual(Object.keys(routes).sort())
  })

  it.each(handlers.map(handler => [handler.path, handler.text] as const))('is what %s is written against: its only export is defineRoute with its own line’s name', (path, text) => {
    expect(definedRoutes(text)).toEqual([routeOf(path)])
    expect(text.match(/^export /gm), path).toHaveLength(1)
    expect(text).toMatch(/^export default defineRoute\(/m)
    // A handler beside defineRoute would answer without stated access.
    expect(text).not.toMatch(/defineEventHandler|eventHandler|defineCachedEventHandler|fromNodeMiddleware/)
  })

  it('is the only way in: outside of /api lies what the trade expects there, and nothing else', () => {
    expect(sourceFiles('server/routes').map(file => file.path)).toEqual(['server/routes/metrics.get.ts'])
  })

  it('leaves open to anybody only these, for these reasons', () => {
    const open: Record<string, string> = {
      'POST /api/auth/sign-in': 'nobody is signed in before it; throttled',
      'POST /api/auth/sign-out': 'a session that has died on the server must still be able to drop its cookie',
      'POST /api/auth/links/look': 'who holds a one-time address has no account yet; the token is 256 random bits; throttled',
      'POST /api/auth/links/take-up': 'the same, and the token works once',
      'GET /api/calendars/{token}': 'calendar programs send neither cookie nor key; the address holds 256 random bits and can be revoked',
      'GET /api/openapi.json': 'describes the interface and holds no data',
      'GET /api/health/live': 'process supervisors have no account; says nothing but that the process answers',
      'GET /api/health/ready': 'the same; says which part fails, in fixed words',
    }
    expect(Object.entries(routes as Record<string, RouteSpec>).filter(([, spec]) => spec.access.kind === 'public').map(([name]) => name).sort()).toEqual(Object.keys(open).sort())
  })

  it('has a schema for the places in each path', () => {
    for (const [name, spec] of Object.entries(routes as Record<string, RouteSpec>)) expect(spec.params !== undefined, name).toBe(name.includes('{'))
  })
})
