import { join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import { hasEnded, spawnGroup, stopChild } from './processes.mjs'
import { root } from './paths.mjs'
import { ServerLog, needsAttention } from './server-log.mjs'
import { httpAddress } from './settings.mjs'
import { Refusal, step } from './say.mjs'

/**
 * The environment of the server.
 *
 * @param {import('./settings.mjs').Settings} settings
 * @param {import('./secrets.mjs').Secrets} secrets
 * @param {string} databaseUrl
 * @returns {Record<string, string | undefined>}
 */
export function serverEnvironment(settings, secrets, databaseUrl) {
  const demo = settings.databaseUrl ? {} : { NULLBEAT_DEMO: '1', DEMO_PASSWORD: settings.demoPassword ?? secrets.demoPassword }
  return {
    ...process.env,
    NITRO_PORT: String(settings.port),
    NITRO_HOST: settings.host,
    // Open connections end before the ten seconds that a stop waits for.
    NITRO_SHUTDOWN_TIMEOUT: '8000',
    PORT: String(settings.port),
    HOST: settings.host,
    DATABASE_URL: databaseUrl,
    NUXT_SESSION_PASSWORD: settings.sessionSecret ?? secrets.sessionSecret,
    SESSION_SECRET: undefined,
    PUBLIC_URL: settings.publicUrl,
    SMTP_URL: settings.smtpUrl,
    MAIL_FROM: settings.mailFrom,
    ALLOW_PLAIN_HTTP: settings.allowPlainHttp ? '1' : undefined,
    LOG_LEVEL: settings.logLevel,
    NULLBEAT_DEMO: undefined,
    DEMO_PASSWORD: undefined,
    ...demo,
    NODE_ENV: 'production',
    TZ: 'UTC',
  }
}

/**
 * @typedef {object} RunningServer
 * @property {import('node:child_process').ChildProcess} process
 * @property {string | undefined} firstAdministrator the one-time address that an empty installation hands out
 * @property {(count: number) => string} tail the last lines it printed
 * @property {() => Promise<boolean>} stop whether it ended by itself in time
 */

/**
 * Starts the server and waits until it says that it is ready.
 *
 * @param {import('./settings.mjs').Settings} settings
 * @param {Record<string, string | undefined>} env
 * @param {{ dev: boolean, logFile: string, onSpawn: (server: RunningServer) => void }} options onSpawn: called at once, so that it can be stopped before it is ready
 * @returns {Promise<RunningServer>}
 */
export async function startServer(settings, env, { dev, logFile, onSpawn }) {
  const args = dev
    ? [join(root, 'node_modules/nuxt/bin/nuxt.mjs'), 'dev', '--host', settings.host, '--port', String(settings.port)]
    : [join(root, '.output/server/index.mjs')]
  const child = spawnGroup(process.execPath, args, { cwd: root, env: { ...env, ...(dev ? { NODE_ENV: 'development' } : {}) }, stdio: ['ignore', 'pipe', 'pipe'] })
  const log = new ServerLog(logFile)
  /** @type {RunningServer} */
  const server = { process: child, firstAdministrator: undefined, tail: count => log.tail(count), stop: () => stopChild(child, 'SIGTERM', 10_000) }
  for (const stream of [child.stdout, child.stderr]) {
    log.follow(stream, (line) => {
      const found = /^first-administrator (\S+)$/.exec(line)
      if (found) server.firstAdministrator = found[1]
      else if (dev || needsAttention(line)) console.log(line)
      return !found
    })
  }
  onSpawn(server)
  await untilReady(`${httpAddress(settings.host, settings.port)}/api/health/ready`, server)
  return server
}

/**
 * @param {string} address
 * @param {RunningServer} server
 */
async function untilReady(address, server) {
  const began = Date.now()
  let nextWord = began + 10_000
  for (;;) {
    const failing = await whatFails(address)
    if (failing === undefined) return
    if (hasEnded(server.process)) throw new Refusal(`The server ended before it was ready. Its last lines:\n${server.tail(40)}`)
    if (Date.now() - began > 120_000) throw new Refusal(`The server was not ready after two minutes: ${failing}. Its last lines:\n${server.tail(40)}`)
    if (Date.now() > nextWord) {
      step(`Waiting for the server: ${failing}`)
      nextWord += 10_000
    }
    await wait(150)
  }
}

/**
 * @param {string} address
 * @returns {Promise<string | undefined>} undefined once it is ready
 */
async function whatFails(address) {
  try {
    const response = await fetch(address, { signal: AbortSignal.timeout(5000), redirect: 'manual' })
    const text = await response.text()
    return response.status === 200 ? undefined : `it answers ${response.status}: ${text.replace(/\s+/g, ' ').slice(0, 300)}`
  }
  catch {
    return 'it does not answer yet'
  }
}
