import { join } from 'node:path'
import { setTimeout as wait } from 'node:timers/promises'
import { requireNode } from './lib/require-node.mjs'
import { ensureBuild } from './lib/build.mjs'
import { ensureDependencies } from './lib/dependencies.mjs'
import { inTurn } from './lib/lock.mjs'
import { beOnlyStart, endOnlyStart, noteServer } from './lib/one-start.mjs'
import { ensureOwnPrograms, startOwnDatabase } from './lib/own-database.mjs'
import { whenNpmIsGone } from './lib/parent.mjs'
import { dataFolder, ensureDataFolder } from './lib/paths.mjs'
import { portMessage, tryPort } from './lib/ports.mjs'
import { stopAllGroups } from './lib/processes.mjs'
import { Refusal, explain, step } from './lib/say.mjs'
import { keepSecrets } from './lib/secrets.mjs'
import { serverEnvironment, startServer } from './lib/server-process.mjs'
import { readSettings } from './lib/settings.mjs'
import { welcome } from './lib/welcome.mjs'
import { migrateDatabase } from './migrate.mjs'

const dev = process.argv.includes('--dev')

/** @type {import('./lib/server-process.mjs').RunningServer | undefined} */
let server
/** @type {(import('./lib/cluster.mjs').RunningCluster & { databaseUrl: string }) | undefined} */
let database
/** @type {Promise<void> | undefined} */
let ending

/**
 * Stops all in the order that loses nothing: the server finishes what it is at, then the database shuts down.
 *
 * @param {number} code the exit code
 * @returns {Promise<void>}
 */
function end(code) {
  ending ??= (async () => {
    if (server && !await server.stop()) console.error('The server did not finish within 10 s and was ended.')
    await database?.stop()
    await stopAllGroups()
    endOnlyStart(dataFolder)
    process.exit(code)
  })()
  return ending
}

/** @param {string} signal */
function onSignal(signal) {
  if (ending) return
  console.log(`\n${signal}: stopping`)
  void end(0)
}

/** A lost database is started again, unless it does not stay up: then all ends, and says so. */
function keepDatabase(/** @type {import('./lib/secrets.mjs').Secrets} */ secrets) {
  /** @type {number[]} */
  const losses = []
  const watch = () => database?.process.once('exit', async () => {
    if (ending) return
    losses.push(Date.now())
    if (losses.filter(at => at > Date.now() - 60_000).length > 5) {
      console.error(`The database keeps ending; its log is ${join(dataFolder, 'postgres.log')}.`)
      return end(1)
    }
    console.error('The database has ended and is started again.')
    try {
      database = await startOwnDatabase(dataFolder, secrets)
      watch()
    }
    catch (error) {
      explain(error)
      await end(1)
    }
  })
  watch()
}

async function main() {
  const settings = readSettings(process.env)
  ensureDataFolder()
  const { afterCrash } = await beOnlyStart(dataFolder, settings.publicUrl)
  let port = await tryPort(settings.port, settings.host)
  // The system closes a killed server's port a moment after the process is gone.
  for (let waited = 0; 'code' in port && afterCrash && waited < 5000; waited += 100) {
    await wait(100)
    port = await tryPort(settings.port, settings.host)
  }
  if ('code' in port) throw new Refusal(portMessage(port.code, settings.port, settings.host))
  const secrets = keepSecrets(dataFolder)

  const installed = inTurn(join(dataFolder, 'install.lock'), 'server/cli/', () => step('Waiting for another command that installs packages'), ensureDependencies)
  await Promise.all([installed, settings.databaseUrl ? undefined : ensureOwnPrograms(dataFolder)])

  const built = dev ? undefined : inTurn(join(dataFolder, 'build.lock'), 'server/cli/', () => step('Waiting for another command that builds'), ensureBuild)
  const migrated = (async () => {
    if (!settings.databaseUrl) {
      database = await startOwnDatabase(dataFolder, secrets)
      keepDatabase(secrets)
    }
    const databaseUrl = settings.databaseUrl ?? database?.databaseUrl ?? ''
    await migrateDatabase(databaseUrl)
    return databaseUrl
  })()
  const [databaseUrl] = await Promise.all([migrated, built])

  step('Starting the server')
  const running = await startServer(settings, serverEnvironment(settings, secrets, databaseUrl), {
    dev,
    logFile: join(dataFolder, 'server.log'),
    onSpawn: (spawned) => {
      server = spawned
      noteServer(dataFolder, spawned.process.pid)
    },
  })
  running.process.once('exit', (code, signal) => {
    if (ending) return
    console.error(`The server has ended (${signal ?? code}). Its last lines:\n${running.tail(40)}`)
    void end(1)
  })
  step('Ready')
  console.log(welcome(settings, secrets, running.firstAdministrator))
}

requireNode()
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => onSignal(signal))
whenNpmIsGone(() => onSignal('npm is gone'))
main().catch((error) => {
  if (ending) return
  explain(error)
  return end(1)
})
