import { chmodSync, chownSync, mkdtempSync, rmSync } from 'node:fs'
import { randomBytes } from 'node:crypto'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { ensureRole, initialiseCluster, startCluster } from '../../server/cli/lib/cluster.mjs'
import { clusterUser } from '../../server/cli/lib/cluster-user.mjs'
import { freeLoopbackPort } from '../../server/cli/lib/ports.mjs'
import { findPostgres } from '../../server/cli/lib/postgres-programs.mjs'
import { migrateDatabase } from '../../server/cli/migrate.mjs'
import { signalFamily } from './signals'

export interface OwnCluster {
  /** Of the product's own role, in a migrated database. */
  url: string
  adminUrl: string
  /** Ends it at once, without a checkpoint, as a power cut would; waits until it has ended. */
  killHard: () => Promise<void>
  /** Starts it again on its port. */
  restart: () => Promise<void>
  /** Stops all its processes where they stand; they go on with `thaw`. */
  freeze: () => void
  thaw: () => void
  remove: () => Promise<void>
}

/** A PostgreSQL of the test's own that keeps what it acknowledges (the shared one of the tests does not), to be killed and frozen. */
export async function startOwnCluster(): Promise<OwnCluster> {
  const programs = findPostgres()
  if (!programs) throw new Error('PostgreSQL’s server programs were not found. `npm test` installs them.')
  const base = mkdtempSync(join(tmpdir(), `nullbeat-test-${process.pid}-`))
  const user = clusterUser()
  chmodSync(base, 0o711)
  if (user) chownSync(base, user.uid, user.gid)
  const place = { programs, user, folder: join(base, 'data') }
  const password = randomBytes(18).toString('base64url')
  await initialiseCluster(place, password, { fast: true })
  const options = { port: await freeLoopbackPort(), password, logFile: join(base, 'postgres.log') }
  let cluster = await startCluster(place, options)
  const rolePassword = randomBytes(18).toString('base64url')
  const adminUrl = cluster.url('postgres', password, 'postgres')
  await ensureRole(adminUrl, { name: 'nullbeat', password: rolePassword })
  const url = cluster.url('nullbeat', rolePassword, 'nullbeat')
  await migrateDatabase(url)
  return {
    url,
    adminUrl,
    killHard: async () => {
      const ended = new Promise(resolve => cluster.process.once('exit', resolve))
      signalFamily(cluster.process.pid!, 'SIGKILL')
      await ended
    },
    restart: async () => {
      cluster = await startCluster(place, options)
    },
    freeze: () => signalFamily(cluster.process.pid!, 'SIGSTOP'),
    thaw: () => signalFamily(cluster.process.pid!, 'SIGCONT'),
    remove: async () => {
      signalFamily(cluster.process.pid!, 'SIGCONT')
      await cluster.stop()
      rmSync(base, { recursive: true, force: true })
    },
  }
}
