import { describe, expect, it } from 'vitest'
import { importsOf, sourceFiles } from '../support/source-files'

/** Which way imports may go. A room's files may not import what its rule finds. */
const rules: { room: string, may: string, breaks: (imported: string) => boolean }[] = [
  { room: 'shared/physics', may: 'imports itself and the propagator’s package, nothing else', breaks: imported => !/^shared\/physics\/|^(node_modules\/)?satellite\.js(\/|$)/.test(imported) },
  { room: 'shared', may: 'imports neither server nor pages nor what Nuxt provides', breaks: imported => /^(server|app|tests)\/|^(#imports|#app|h3|nitropack|nuxt|vue)(\/|$)|^node:(?!url$)/.test(imported) },
  { room: 'app', may: 'imports nothing of the server', breaks: imported => /^server\//.test(imported) },
  { room: 'server/api', may: 'never touches the database or the queue', breaks: imported => /^server\/(database|jobs|workers)\/|^(drizzle-orm|pg|pg-boss)(\/|$)/.test(imported) },
  { room: 'server/routes', may: 'never touches the database or the queue', breaks: imported => /^server\/(database|jobs|workers)\/|^(drizzle-orm|pg|pg-boss)(\/|$)/.test(imported) },
  { room: 'server/domain', may: 'knows nothing of HTTP', breaks: imported => /^server\/(http|api|middleware|plugins)\/|^(h3|nitropack|#imports|nuxt)(\/|$)/.test(imported) },
  { room: 'server/database', may: 'imports nothing that uses it', breaks: imported => /^server\/(domain|http|api|jobs|mail|workers|plugins)\//.test(imported) },
]

describe('the arrows between the rooms', () => {
  it.each(rules)('$room $may', ({ room, breaks }) => {
    const files = sourceFiles(room)
    expect(files.length, `${room} has no files: mend the rule`).toBeGreaterThan(0)
    expect(files.flatMap(file => file.imports.filter(breaks).map(imported => `${file.path} imports ${imported}`))).toEqual([])
  })

  it('are read from every form of import', () => {
    const text = [
      'import a from \'./beside\'', 'import type { B } from \'~~/server/domain/b\'', 'import {\n  c,\n} from \'#shared/c\'', 'export * from \'../above\'',
      'const d = await import(\'~/d\')', 'import \'h3\'', 'const text = \'import x from "y"\'',
    ].join('\n')
    expect(importsOf('server/api/x.ts', text)).toEqual(['server/api/beside', 'server/domain/b', 'shared/c', 'server/above', 'app/d', 'h3'])
  })
})
