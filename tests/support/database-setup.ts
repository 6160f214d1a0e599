import { chmodSync, chownSync, existsSync, mkdtempSync, readdirSync, rmSync } from 'node:fs'
import { randomBytes } from 'node:crypto'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import pg from 'pg'
import type { TestProject } from 'vitest/node'
import { ensureRole, initialiseCluster, startCluster } from '../../server/cli/lib/cluster.mjs'
import { clusterUser } from '../../server/cli/lib/cluster-user.mjs'
import { root } from '../../server/cli/lib/paths.mjs'
import { freeLoopbackPort } from '../../server/cli/lib/ports.mjs'
import { findPostgres } from '../../server/cli/lib/postgres-programs.mjs'
import { commandLineOf } from '../../server/cli/lib/processes.mjs'
import { migrateDatabase } from '../../server/cli/migrate.mjs'

declare module 'vitest' {
  export interface ProvidedContext {
    /** A superuser's address of the test server. */
    databaseAdminUrl: string
    /** The address of the role that owns each test's database, without a database's name. */
    databaseOwnerUrl: string
    /** The database, migrated and closed to connections, that each test's own is copied from. */
    databaseTemplate: string
  }
}

interface TestServer {
  adminUrl: string
  ownerUrl: string
  template: string
  stop: () => Promise<void>
}

/** One server for all projects of a run: each loads this module anew, so it is kept on the process. */
const shared = globalThis as { nullbeatTestServer?: { server: Promise<TestServer>, users: number } }

export default async function setup(project: TestProject): Promise<() => Promise<void>> {
  const holder = shared.nullbeatTestServer ??= { server: startTestServer(), users: 0 }
  holder.users += 1
  const server = await holder.server
  project.provide('databaseAdminUrl', server.adminUrl)
  project.provide('databaseOwnerUrl', server.ownerUrl)
  project.provide('databaseTemplate', server.template)
  return async () => {
    holder.users -= 1
    if (holder.users > 0) return
    delete shared.nullbeatTestServer
    await server.stop()
  }
}

async function startTestServer(): Promise<TestServer> {
  const given = process.env.NULLBEAT_TEST_SERVER_URL
  if (given) return withTemplate(given, async () => {})

  const programs = findPostgres()
  if (!programs) throw new Error('PostgreSQL’s server programs were not found. `npm test` installs them; or name a server in NULLBEAT_TEST_SERVER_URL.')
  removeLeftOvers()
  const folder = mkdtempSync(join(tmpdir(), `nullbeat-test-${process.pid}-`))
  const user = clusterUser()
  chmodSync(folder, 0o711)
  if (user) chownSync(folder, user.uid, user.gid)
  const place = { programs, user, folder: join(folder, 'data') }
  const password = randomBytes(18).toString('base64url')
  await initialiseCluster(place, password, { fast: true })
  const cluster = await startCluster(place, {
    port: await freeLoopbackPort(), password, logFile: join(folder, 'postgres.log'),
    settings: { fsync: 'off', synchronous_commit: 'off', full_page_writes: 'off', max_connections: '200' },
  })
  const stop = async (): Promise<void> => {
    await cluster.stop()
    rmSync(folder, { recursive: true, force: true })
  }
  try {
    return await withTemplate(cluster.url('postgres', password, 'postgres'), stop)
  }
  catch (error) {
    await stop()
    throw error
  }
}

/** Removes the folders of runs that were killed: their number in the name is no longer a test run's. */
function removeLeftOvers(): void {
  for (const name of readdirSync(tmpdir())) {
    const pid = Number(/^nullbeat-test-(\d+)-/.exec(name)?.[1])
    if (pid && commandLineOf(pid) === undefined) rmSync(join(tmpdir(), name), { recursive: true, force: true })
  }
}

/** Makes the role that tests work as, no superuser just as in operation, and the template that it owns. */
async function withTemplate(adminUrl: string, stop: () => Promise<void>): Promise<TestServer> {
  const suffix = randomBytes(6).toString('hex')
  const owner = `nullbeat_test_${suffix}`
  const template = `nullbeat_template_${suffix}`
  const password = randomBytes(18).toString('base64url')
  await ensureRole(adminUrl, { name: owner, password, createDatabase: false, mayCreate: true })
  const ownerUrl = new URL(adminUrl)
  ownerUrl.username = owner
  ownerUrl.password = password

  const admin = new pg.Client({ connectionString: adminUrl })
  await admin.connect()
  try {
    await admin.query(`create database ${template} owner ${owner}`)
    ownerUrl.pathname = `/${template}`
    if (existsSync(join(root, 'drizzle/meta/_journal.json'))) await migrateDatabase(ownerUrl.href)
    await admin.query(`alter database ${template} is_template true allow_connections false`)
  }
  finally {
    await admin.end()
  }
  ownerUrl.pathname = '/'
  const cleanUp = process.env.NULLBEAT_TEST_SERVER_URL ? () => dropTemplate(adminUrl, template, owner) : stop
  return { adminUrl, ownerUrl: ownerUrl.href, template, stop: cleanUp }
}

async function dropTemplate(adminUrl: string, template: string, owner: string): Promise<void> {
  const admin = new pg.Client({ connectionString: adminUrl })
  await admin.connect()
  await admin.query(`alter database ${template} is_template false`)
  const owned = await admin.query<{ datname: string }>('select datname from pg_database where datdba = (select oid from pg_roles where rolname = $1)', [owner])
  for (const { datname } of owned.rows) await admin.query(`drop database ${pg.escapeIdentifier(datname)} with (force)`)
  await admin.query(`drop role ${owner}`)
  await admin.end()
}
