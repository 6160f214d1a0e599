import { join } from 'node:path'
import { writeWhole } from './files.mjs'
import { dataFolder } from './paths.mjs'
import { spawnGroup } from './processes.mjs'
import { Refusal } from './say.mjs'

/**
 * Runs a command to its end, keeping what it prints.
 *
 * @param {string} command
 * @param {string[]} args
 * @param {import('node:child_process').SpawnOptions & { show?: boolean, input?: string }} [options] show: print it as it comes
 * @returns {Promise<{ code: number, output: string }>} code 127 if there is no such command
 */
export function run(command, args, { show = false, input, ...options } = {}) {
  return new Promise((resolve) => {
    const child = spawnGroup(command, args, { stdio: [input === undefined ? 'ignore' : 'pipe', 'pipe', 'pipe'], ...options })
    let output = ''
    for (const [stream, screen] of /** @type {const} */ ([[child.stdout, process.stdout], [child.stderr, process.stderr]])) {
      stream?.setEncoding('utf8').on('data', (/** @type {string} */ text) => {
        output = (output + text).slice(-400_000)
        if (show) screen.write(text)
      })
    }
    if (input !== undefined) child.stdin?.end(input)
    child.once('error', error => resolve({ code: 127, output: error.message }))
    child.once('close', code => resolve({ code: code ?? 1, output }))
  })
}

/**
 * Runs a command quietly; if it fails, what it said about errors and its last lines are the message.
 *
 * @param {string} purpose what failed, for the message
 * @param {string} command
 * @param {string[]} args
 * @param {Parameters<typeof run>[2]} [options]
 * @returns {Promise<string>} what it printed
 */
export async function runOrRefuse(purpose, command, args, options) {
  const { code, output } = await run(command, args, options)
  if (code !== 0) {
    const file = join(dataFolder, 'failed.log')
    writeWhole(file, output)
    const errors = output.split('\n').filter(line => /\berror\b/i.test(line)).slice(0, 10).join('\n')
    throw new Refusal(`${purpose} failed (${command} ended with ${code}). All it printed is in ${file}.\n${errors}\n…\n${lastLines(output, 25)}`)
  }
  return output
}

/**
 * @param {string} text
 * @param {number} count
 */
export function lastLines(text, count) {
  return text.trimEnd().split('\n').slice(-count).join('\n')
}
