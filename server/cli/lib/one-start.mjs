import { join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import { writeWhole } from './files.mjs'
import { holderOf, releaseLock, takeLock } from './lock.mjs'
import { npmParent } from './parent.mjs'
import { isRunning } from './processes.mjs'
import { Refusal } from './say.mjs'

const command = 'start.mjs'
const serverWords = { serve: ['.output/server/index.mjs'], dev: ['nuxt', 'dev'] }

/**
 * Lets only one start run in a checkout. If an earlier one was killed, waits until the server it had
 * started has ended too, since it still holds the port.
 *
 * @param {string} dataFolder
 * @param {string} address noted for whoever tries to start a second one
 * @returns {Promise<{ afterCrash: boolean }>} whether an earlier one was killed
 */
export async function beOnlyStart(dataFolder, address) {
  const file = join(dataFolder, 'start.lock')
  const me = { pid: process.pid, command, note: address, npm: npmParent() }
  let outcome = takeLock(file, me)
  for (let waited = 0; !outcome.held && waited < 30_000 && isEnding(outcome.by); waited += 200) {
    await wait(200)
    outcome = takeLock(file, me)
  }
  if (!outcome.held) {
    throw new Refusal(`Nullbeat is running from this folder already: process ${outcome.by.pid}, ${outcome.by.note}. Stop it first (Ctrl-C there, or kill ${outcome.by.pid}); for a second one, use a second checkout.`)
  }
  const orphan = Number(/** @type {{ serverPid?: number } | undefined} */ (outcome.previous)?.serverPid)
  if (orphan) await endOrphan(orphan)
  return { afterCrash: outcome.previous !== undefined }
}

/**
 * A start whose npm was killed notices and ends by itself.
 *
 * @param {import('./lock.mjs').Holder & { npm?: number }} holder
 */
function isEnding(holder) {
  return holder.npm !== undefined && !isRunning(holder.npm, ['npm'])
}

/** @param {number} pid */
async function endOrphan(pid) {
  const alive = () => Object.values(serverWords).some(words => isRunning(pid, words))
  for (const signal of /** @type {const} */ (['SIGTERM', 'SIGKILL'])) {
    if (!alive()) return
    try {
      process.kill(pid, signal)
    }
    catch { /* it has ended just now */ }
    for (let waited = 0; waited < 12_000 && alive(); waited += 50) await wait(50)
  }
}

/**
 * Notes the server's process, for the start after a crash.
 *
 * @param {string} dataFolder
 * @param {number | undefined} serverPid
 */
export function noteServer(dataFolder, serverPid) {
  const file = join(dataFolder, 'start.lock')
  writeWhole(file, JSON.stringify({ ...holderOf(file), serverPid }))
}

/** @param {string} dataFolder */
export function endOnlyStart(dataFolder) {
  releaseLock(join(dataFolder, 'start.lock'))
}

/**
 * @param {string} dataFolder
 * @returns {boolean} whether a server runs from this checkout now
 */
export function startIsRunning(dataFolder) {
  const holder = holderOf(join(dataFolder, 'start.lock'))
  return holder !== undefined && isRunning(holder.pid, [command])
}
