import { execFileSync, spawn, spawnSync } from 'node:child_process'
import { existsSync, readFileSync, readdirSync } from 'node:fs'

/**
 * The command line of a process. It, and not a signal, tells whether a process id kept in a file still
 * means the same program: ids are given again.
 *
 * @param {number} pid
 * @returns {string | undefined} undefined if there is no such process, or it has ended and waits to be reaped
 */
export function commandLineOf(pid) {
  if (!Number.isInteger(pid) || pid <= 0) return undefined
  if (existsSync('/proc/self/cmdline')) {
    try {
      return readFileSync(`/proc/${pid}/cmdline`, 'utf8').replaceAll('\0', ' ').trim() || undefined
    }
    catch {
      return undefined
    }
  }
  try {
    return execFileSync('ps', ['-p', String(pid), '-o', 'command='], { encoding: 'utf8', stdio: ['ignore', 'pipe', 'ignore'] }).trim() || undefined
  }
  catch {
    return undefined
  }
}

/**
 * @param {number} pid
 * @param {string[]} words all of which its command line must hold
 * @returns {boolean}
 */
export function isRunning(pid, words) {
  const line = commandLineOf(pid)
  return line !== undefined && words.every(word => line.includes(word))
}

/**
 * Looks through all processes, where the system lists them as files.
 *
 * @param {string} words that must follow each other in the command line
 * @returns {number | undefined}
 */
export function findRunning(words) {
  if (!existsSync('/proc/self/cmdline')) return undefined
  return readdirSync('/proc').map(Number).filter(pid => pid > 0 && pid !== process.pid).find(pid => commandLineOf(pid)?.includes(words))
}

/** @type {boolean | undefined} */
let setprivWorks

/**
 * Wraps a command so that the system signals it when its parent dies, even by kill −9.
 * Where setpriv is missing (or too plain to know how) the command is returned as it is.
 *
 * @param {'TERM' | 'INT' | 'KILL'} signal
 * @param {string} command
 * @param {string[]} args
 * @returns {[string, string[]]}
 */
export function boundToParent(signal, command, args) {
  setprivWorks ??= spawnSync('setpriv', ['--pdeathsig', 'TERM', '--', 'true'], { stdio: 'ignore' }).status === 0
  return setprivWorks ? ['setpriv', ['--pdeathsig', signal, '--', command, ...args]] : [command, args]
}

/** Children that must not outlive this process, each the head of a process group, with the signal that ends it. @type {Map<import('node:child_process').ChildProcess, NodeJS.Signals>} */
const groups = new Map()

/**
 * Starts a child at the head of a process group of its own: a Ctrl-C in the terminal then reaches only this
 * process, which stops its children in the right order.
 *
 * @param {string} command
 * @param {string[]} args
 * @param {import('node:child_process').SpawnOptions & { deathSignal?: 'TERM' | 'INT' | 'KILL' }} [options]
 * @returns {import('node:child_process').ChildProcess}
 */
export function spawnGroup(command, args, { deathSignal = 'TERM', ...options } = {}) {
  const [program, words] = boundToParent(deathSignal, command, args)
  const child = spawn(program, words, { ...options, detached: true })
  groups.set(child, `SIG${deathSignal}`)
  child.once('error', () => groups.delete(child))
  child.once('exit', () => {
    // At once, while the number cannot have been given to anyone else: what the head has left behind ends too.
    signalGroup(child, 'SIGKILL')
    groups.delete(child)
  })
  return child
}

/**
 * Signals a child's whole group.
 *
 * @param {import('node:child_process').ChildProcess} child
 * @param {NodeJS.Signals} signal
 */
export function signalGroup(child, signal) {
  if (!child.pid) return
  try {
    process.kill(-child.pid, signal)
  }
  catch { /* the group has ended */ }
}

/**
 * Stops one child: a signal, a patience, then force.
 *
 * @param {import('node:child_process').ChildProcess} child
 * @param {NodeJS.Signals} signal
 * @param {number} patienceMs
 * @returns {Promise<boolean>} whether it ended by itself in time
 */
export async function stopChild(child, signal, patienceMs) {
  if (hasEnded(child)) return true
  return new Promise((resolve) => {
    let inTime = true
    const timer = setTimeout(() => {
      inTime = false
      child.kill('SIGKILL')
    }, patienceMs)
    child.once('exit', () => {
      clearTimeout(timer)
      resolve(inTime)
    })
    child.kill(signal)
  })
}

/** @param {import('node:child_process').ChildProcess} child */
export function hasEnded(child) {
  return child.exitCode !== null || child.signalCode !== null || child.pid === undefined
}

/**
 * Ends every group that is still there: asked first, forced after a patience.
 *
 * @param {number} [patienceMs]
 * @returns {Promise<void>}
 */
export async function stopAllGroups(patienceMs = 8000) {
  await Promise.all([...groups].map(async ([child, signal]) => {
    // A shell or npm between us and the one that works passes no signal on, so the whole group is told.
    if (!hasEnded(child) && signal === 'SIGTERM') signalGroup(child, signal)
    await stopChild(child, signal, patienceMs)
  }))
}
