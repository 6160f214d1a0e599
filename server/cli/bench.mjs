import { spawnSync } from 'node:child_process'
import { existsSync, mkdtempSync, readdirSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { root } from './lib/paths.mjs'

const { build } = await import('esbuild')
const folder = join(root, 'tests/bench')
// Inside the checkout, so that packages are found from there.
const bundles = mkdtempSync(join(root, 'node_modules/.bench-'))
process.once('exit', () => rmSync(bundles, { recursive: true, force: true }))

// Words choose files, options go to them: `npm run bench -- prediction --full`.
const options = process.argv.slice(2).filter(word => word.startsWith('--'))
const wanted = process.argv.slice(2).filter(word => !word.startsWith('--'))
const files = (existsSync(folder) ? readdirSync(folder, { recursive: true, encoding: 'utf8' }) : [])
  .filter(name => /\.bench\.(mjs|ts)$/.test(name) && (wanted.length === 0 || wanted.some(word => name.includes(word)))).sort()
if (files.length === 0) {
  console.error(`No ${wanted.join(' or ') || '*.bench.ts'} under ${folder}.`)
  process.exitCode = 1
}
for (const name of files) {
  const outfile = join(bundles, `${name.replaceAll('/', '-')}.mjs`)
  await build({ entryPoints: [join(folder, name)], outfile, bundle: true, platform: 'node', format: 'esm', packages: 'external', alias: { '#shared': join(root, 'shared'), '~~': root }, logLevel: 'error' })
  const { status } = spawnSync(process.execPath, [outfile, ...options], { cwd: root, stdio: 'inherit', env: { ...process.env, TZ: 'UTC' } })
  if (status !== 0) process.exitCode = 1
}
