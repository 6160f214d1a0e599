import { spawn } from 'node:child_process'
import { existsSync } from 'node:fs'
import { join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import { root } from '../../server/cli/lib/paths.mjs'
import { freeLoopbackPort } from '../../server/cli/lib/ports.mjs'
import { boundToParent, hasEnded, stopChild } from '../../server/cli/lib/processes.mjs'

/** What the demo's people sign in with in tests. */
export const demoPassword = 'only-for-the-tests-7'

export interface TestServer {
  /** Without a slash at its end. */
  url: string
  pid: number
  /** All that it has printed. */
  log: () => string
  /** Asks it to finish, and forces it after ten seconds. */
  stop: () => Promise<void>
  /** Ends it as a power cut would. */
  kill: () => void
  /** Waits until it answers that it is ready. */
  ready: () => Promise<void>
  /** Its exit code, once it has ended; null where a signal ended it. */
  ended: Promise<number | null>
}

interface Options {
  databaseUrl: string
  env?: Record<string, string>
  /** Loads the demo; its people's password is `demoPassword`. */
  demo?: boolean
}

/** Starts the built server on a free port of loopback, and waits until it is ready. */
export async function startServer(options: Options): Promise<TestServer> {
  const server = await spawnServer(options)
  await server.ready()
  return server
}

/** Starts it, and does not wait: for tests that end it while it starts. */
export async function spawnServer({ databaseUrl, env = {}, demo = false }: Options): Promise<TestServer> {
  const entry = join(root, '.output/server/index.mjs')
  if (!existsSync(entry)) throw new Error('There is no built server: run `npm run build` first (`npm test` does it by itself).')
  const port = await freeLoopbackPort()
  const url = `http://127.0.0.1:${port}`
  // The test runner's own marks would change how the server's packages behave.
  const ofRunner = /^(VITEST|NODE_OPTIONS|DEV$|PROD$|SSR$|MODE$|BASE_URL$|TEST$)/
  const inherited = Object.fromEntries(Object.entries(process.env).filter(([name]) => !ofRunner.test(name)))

  const [program, args] = boundToParent('KILL', process.execPath, [entry])
  const child = spawn(program, args, {
    cwd: root,
    stdio: ['ignore', 'pipe', 'pipe'],
    env: {
      ...inherited,
      NITRO_PORT: String(port), NITRO_HOST: '127.0.0.1', PORT: String(port), HOST: '127.0.0.1',
      DATABASE_URL: databaseUrl, PUBLIC_URL: url,
      NUXT_SESSION_PASSWORD: 'a-session-secret-only-for-the-tests-0001',
      MAIL_FROM: 'Nullbeat <nullbeat@tern-bay.example>',
      NODE_ENV: 'production', TZ: 'UTC', NULLBEAT_TEST: '1', LOG_LEVEL: 'info',
      ...(demo ? { NULLBEAT_DEMO: '1', DEMO_PASSWORD: demoPassword } : {}),
      ...env,
    },
  })
  let log = ''
  for (const stream of [child.stdout, child.stderr]) stream.setEncoding('utf8').on('data', (text: string) => { log += text })

  const ended = new Promise<number | null>(resolve => child.once('exit', code => resolve(code)))
  const stop = async () => void await stopChild(child, 'SIGTERM', 10_000)
  const ready = async () => {
    const deadline = Date.now() + 90_000
    for (let last = 'no answer'; ; await wait(100)) {
      try {
        const response = await fetch(`${url}/api/health/ready`, { signal: AbortSignal.timeout(5000) })
        if (response.status === 200) return
        last = `${response.status} ${await response.text()}`
      }
      catch { /* not listening yet */ }
      if (hasEnded(child) || Date.now() > deadline) {
        await stop()
        throw new Error(`The server was not ready (${last}). It printed:\n${log}`)
      }
    }
  }
  return { url, pid: child.pid!, log: () => log, stop, kill: () => void child.kill('SIGKILL'), ready, ended }
}
