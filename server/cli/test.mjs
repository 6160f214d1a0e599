import { readFileSync, rmSync } from 'node:fs'
import { join } from 'node:path'
import { requireNode } from './lib/require-node.mjs'
import { ensureBuild, nuxt } from './lib/build.mjs'
import { ensureChromium } from './lib/chromium.mjs'
import { ensureDependencies } from './lib/dependencies.mjs'
import { inTurn } from './lib/lock.mjs'
import { startIsRunning } from './lib/one-start.mjs'
import { whenNpmIsGone } from './lib/parent.mjs'
import { dataFolder, ensureDataFolder, root } from './lib/paths.mjs'
import { ensurePostgres } from './lib/postgres-programs.mjs'
import { stopAllGroups } from './lib/processes.mjs'
import { run } from './lib/run.mjs'
import { explain, step } from './lib/say.mjs'
import { countResults } from './lib/test-results.mjs'

const waiting = () => step('Waiting for another command in this folder')
/** The long tests alone, without lint and types: `npm run endurance`. */
const enduranceOnly = process.env.NULLBEAT_ENDURANCE === '1'
let passed = 0
let failed = 0

/**
 * Counts one check, and prints what it said if it failed.
 *
 * @param {string} name
 * @param {string[]} command a program of node_modules and its arguments
 */
async function check(name, [program, ...args]) {
  const { code, output } = await run(process.execPath, [join(root, 'node_modules', program), ...args], { cwd: root, env: { ...process.env, NO_COLOR: '1' } })
  step(`${name}: ${code === 0 ? 'clean' : 'failed'}`)
  if (code === 0) passed += 1
  else {
    failed += 1
    console.log(output)
  }
}

async function build() {
  try {
    if (startIsRunning(dataFolder)) step('A server runs from this folder: if the sources have changed, start it again afterwards')
    if (!await inTurn(join(dataFolder, 'build.lock'), 'server/cli/', waiting, ensureBuild)) step('The build is current')
  }
  catch (error) {
    failed += 1
    explain(error)
  }
}

/** @param {string} chromium */
async function tests(chromium) {
  const results = join(dataFolder, 'test-results.json')
  rmSync(results, { force: true })
  const { code } = await run(process.execPath, [join(root, 'node_modules/vitest/vitest.mjs'), 'run', '--reporter=default', '--reporter=json', `--outputFile.json=${results}`, ...process.argv.slice(2)], {
    cwd: root, show: true, env: { ...process.env, NULLBEAT_CHROMIUM: chromium },
  })
  let report
  try {
    report = JSON.parse(readFileSync(results, 'utf8'))
  }
  catch { /* the runner died before it could write: counted as a failure */ }
  const counts = countResults(report, code)
  passed += counts.passed
  failed += counts.failed
}

async function main() {
  ensureDataFolder()
  const installed = inTurn(join(dataFolder, 'install.lock'), 'server/cli/', waiting, ensureDependencies)
  const [chromium] = await Promise.all([ensureChromium(), ensurePostgres(), installed])
  // Once the types are there, the build works in a folder of its own and leaves them to the two checks.
  await nuxt('Preparing the types', ['prepare'])
  await Promise.all([build(), (async () => {
    if (enduranceOnly) return
    await check('Lint', ['eslint/bin/eslint.js', '.'])
    await check('Types', ['nuxt/bin/nuxt.mjs', 'typecheck'])
  })()])
  await tests(chromium)
}

/** @type {Promise<never> | undefined} */
let ending

/** @param {number} code */
function end(code) {
  ending ??= stopAllGroups().then(() => process.exit(code))
  return ending
}

requireNode()
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => void end(1))
whenNpmIsGone(() => void end(1))
try {
  await main()
}
catch (error) {
  if (!ending) explain(error)
  failed += 1
}
if (!ending) {
  await stopAllGroups()
  console.log(`${passed} passed, ${failed} failed`)
  process.exitCode = failed > 0 ? 1 : 0
}
