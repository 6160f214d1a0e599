import { rmSync } from 'node:fs'
import { join } from 'node:path'
import { fingerprint, isCurrent, makeUnlessCurrent } from './marker.mjs'
import { root } from './paths.mjs'
import { runOrRefuse } from './run.mjs'
import { step } from './say.mjs'

const sources = ['app', 'server', 'shared', 'drizzle', 'data', 'public', 'nuxt.config.ts', 'tailwind.config.ts', 'tailwind.config.js', 'tsconfig.json', 'package.json', 'package-lock.json']
const marker = join(root, '.output', '.nullbeat-built')

/** @returns {string} the fingerprint of what the server is built from */
export function sourcesFingerprint() {
  return fingerprint(root, sources, [process.version], ['server/cli'])
}

/** @returns {boolean} whether the built server is the one that the sources make */
export function buildIsCurrent() {
  return isCurrent(marker, sourcesFingerprint())
}

/**
 * Builds the server unless it is current.
 *
 * @returns {Promise<boolean>} whether it was built
 */
export async function ensureBuild() {
  return makeUnlessCurrent(marker, sourcesFingerprint(), async () => {
    step('Building (about a minute)')
    rmSync(join(root, '.output'), { recursive: true, force: true })
    await nuxt('Building', ['build'])
  })
}

/**
 * Runs one of the framework's commands quietly.
 *
 * @param {string} purpose
 * @param {string[]} args
 * @returns {Promise<string>} what it printed
 */
export function nuxt(purpose, args) {
  return runOrRefuse(purpose, process.execPath, [join(root, 'node_modules/nuxt/bin/nuxt.mjs'), ...args], { cwd: root, env: { ...process.env, NODE_ENV: 'production', CI: '1', NO_COLOR: '1' } })
}
