import { join } from 'node:path'
import { fingerprint, makeUnlessCurrent } from './marker.mjs'
import { root } from './paths.mjs'
import { runOrRefuse } from './run.mjs'
import { step } from './say.mjs'

/**
 * Installs exactly what the lock file names, unless that is there already.
 *
 * @returns {Promise<void>}
 */
export async function ensureDependencies() {
  const wanted = fingerprint(root, ['package-lock.json'], [process.platform, process.arch, process.versions.modules])
  await makeUnlessCurrent(join(root, 'node_modules', '.nullbeat-installed'), wanted, async () => {
    step('Installing packages (about a minute the first time)')
    // NODE_ENV=production in the caller's environment would leave out what the build needs.
    await runOrRefuse('Installing packages', 'npm', ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'], { cwd: root, env: { ...process.env, NODE_ENV: '' } })
  })
}
