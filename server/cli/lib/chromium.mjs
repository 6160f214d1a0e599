import { accessSync, constants } from 'node:fs'
import { delimiter, join } from 'node:path'
import { canInstall, install } from './apt.mjs'
import { Refusal } from './say.mjs'

/**
 * @param {Record<string, string | undefined>} [env]
 * @returns {string | undefined} the path of a Chromium that can be run
 */
export function findChromium(env = process.env) {
  const folders = ['/usr/bin', ...(env.PATH ?? '').split(delimiter)].filter(Boolean)
  const names = ['chromium', 'chromium-browser', 'google-chrome']
  const candidates = env.NULLBEAT_CHROMIUM ? [env.NULLBEAT_CHROMIUM] : names.flatMap(name => folders.map(folder => join(folder, name)))
  return candidates.find((path) => {
    try {
      accessSync(path, constants.X_OK)
      return true
    }
    catch {
      return false
    }
  })
}

/**
 * The browser for the end-to-end tests, installed if that is possible.
 *
 * @returns {Promise<string>} its path
 */
export async function ensureChromium() {
  const found = findChromium()
  if (found) return found
  if (!process.env.NULLBEAT_CHROMIUM && canInstall()) await install(['chromium'])
  const installed = findChromium()
  if (installed) return installed
  throw new Refusal('The tests need Chromium, and none was found. Install it (on Debian: sudo apt-get install chromium), or give its path in NULLBEAT_CHROMIUM.')
}
