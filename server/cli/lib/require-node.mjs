import { readFileSync } from 'node:fs'

/**
 * Whether one dotted version is at least another.
 *
 * @param {string} version
 * @param {string} least
 * @returns {boolean}
 */
export function isAtLeast(version, least) {
  const a = version.replace(/^v/, '').split('.').map(Number)
  const b = least.split('.').map(Number)
  for (let i = 0; i < 3; i += 1) {
    if ((a[i] || 0) !== (b[i] || 0)) return (a[i] || 0) > (b[i] || 0)
  }
  return true
}

/** Ends the process with a plain message on a Node.js that is too old to run the rest. */
export function requireNode() {
  const { engines } = JSON.parse(readFileSync(new URL('../../../package.json', import.meta.url), 'utf8'))
  const least = engines.node.replace('>=', '').trim()
  if (isAtLeast(process.version, least)) return
  console.error(`Nullbeat needs Node.js ${least} or later; this is ${process.version}. Install a newer one and start again.`)
  process.exit(1)
}
