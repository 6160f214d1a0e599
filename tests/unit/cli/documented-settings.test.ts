import { execFileSync } from 'node:child_process'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { expect, it } from 'vitest'
import { root } from '../../../server/cli/lib/paths.mjs'

/** Read by the product, but set by its own commands, by the system or for its tests: nothing that an operator sets. */
const inner = ['NULLBEAT_DEMO', 'NULLBEAT_TEST', 'NULLBEAT_ROLE', 'NULLBEAT_WORKER', 'NULLBEAT_CHROMIUM', 'NULLBEAT_ENDURANCE', 'NUXT_SESSION_PASSWORD', 'NITRO_UNIX_SOCKET', 'PATH']

it('every setting of the environment that the code reads stands in the README’s table, and no other', () => {
  const files = execFileSync('git', ['ls-files', '--cached', '--others', '--exclude-standard', 'server', 'shared', 'app', 'nuxt.config.ts'], { cwd: root, encoding: 'utf8' }).trim().split('\n').filter(file => /\.(ts|mjs|vue)$/.test(file))
  const text = files.map(file => readFileSync(join(root, file), 'utf8')).join('\n')
  const read = new Set([...text.matchAll(/process\.env\.([A-Z][A-Z0-9_]+)/g), ...text.matchAll(/\bgiven\('([A-Z][A-Z0-9_]+)'\)/g)].map(([, name]) => name!))
  const documented = [...readFileSync(join(root, 'README.md'), 'utf8').matchAll(/^\| `([A-Z][A-Z0-9_]+)` \|/gm)].map(([, name]) => name!)
  expect(documented.sort()).toEqual([...read].filter(name => !inner.includes(name)).sort())
})
