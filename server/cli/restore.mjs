import { existsSync, readFileSync } from 'node:fs'
import { resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { differences, fingerprint, printFingerprint } from './lib/fingerprint.mjs'
import { connect, openKeptDatabase, postgresTool, runTool } from './lib/kept-database.mjs'
import { run } from './lib/run.mjs'
import { Refusal, explain, step } from './lib/say.mjs'

const schemas = ['public', 'pgboss', 'drizzle']

/**
 * Reads a copy back into a database and holds counts and hashes against those of the copy. A database that holds
 * anything is written over only where its name is given; its content is then gone.
 *
 * @param {string} url
 * @param {string} file
 * @param {{ over?: string }} [options] over: the name of the database
 * @returns {Promise<import('./lib/fingerprint.mjs').Fingerprint>}
 */
export async function restore(url, file, { over } = {}) {
  if (!existsSync(file)) throw new Refusal(`There is no ${file}.`)
  /** @type {import('./lib/fingerprint.mjs').Fingerprint | undefined} */
  const expected = existsSync(`${file}.json`) ? JSON.parse(readFileSync(`${file}.json`, 'utf8')) : undefined
  const client = await connect(url)
  try {
    const { rows: [{ name }] } = await client.query('SELECT current_database() AS name')
    const { rows: [{ tables }] } = await client.query(`SELECT count(*)::int AS tables FROM pg_class c JOIN pg_namespace n ON n.oid = c.relnamespace WHERE c.relkind IN ('r','p','v','S') AND n.nspname = ANY($1)`, [schemas])
    if (over !== undefined && over !== name) throw new Refusal(`This database is called ${name}, not ${over}: nothing was changed.`)
    if (tables > 0 && over === undefined) throw new Refusal(`The database ${name} is not empty. Restore into an empty one, or, if all that it holds may go, say so by its name: npm run restore -- FILE --over ${name}`)
    const { rows: [{ others }] } = await client.query(`SELECT count(*)::int AS others FROM pg_stat_activity WHERE datname = current_database() AND pid <> pg_backend_pid() AND application_name LIKE 'nullbeat%'`)
    if (others > 0) throw new Refusal(`A server works on ${name}: stop it first.`)
    // Emptied and filled in two steps: a copy that cannot be read must be found before the first.
    await requireReadable(file)
    await client.query(`BEGIN; ${schemas.map(schema => `DROP SCHEMA IF EXISTS ${schema} CASCADE`).join('; ')}; CREATE SCHEMA public; ALTER SCHEMA public OWNER TO pg_database_owner; COMMIT`)
    await runTool('pg_restore', url, ['--no-owner', '--no-privileges', '--exit-on-error', '--single-transaction', file])
    await client.query('BEGIN ISOLATION LEVEL REPEATABLE READ READ ONLY')
    const found = await fingerprint(client)
    const wrong = expected ? differences(expected, found) : []
    if (wrong.length > 0) throw new Refusal(`What was restored is not what was copied:\n${wrong.join('\n')}`)
    return found
  }
  finally {
    await client.end()
  }
}

/** @param {string} file */
async function requireReadable(file) {
  const { program, env } = postgresTool('pg_restore')
  const { code, output } = await run(program, ['--list', file], { env: { ...process.env, ...env } })
  if (code !== 0) throw new Refusal(`${file} is no whole copy: nothing was changed.\n${output.trim().split('\n').slice(-5).join('\n')}`)
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  /** @type {{ stop: () => Promise<void> } | undefined} */
  let kept
  try {
    const [given, flag, over, ...more] = process.argv.slice(2)
    if (!given || (flag !== undefined && (flag !== '--over' || !over)) || more.length > 0) throw new Refusal('Say what from: npm run restore -- FILE, or npm run restore -- FILE --over NAME for a database that is not empty')
    const opened = await openKeptDatabase()
    kept = opened
    step('Reading the copy back')
    console.log(printFingerprint(await restore(opened.url, resolve(given), { over })))
    step(existsSync(`${resolve(given)}.json`) ? 'Every count and hash is that of the copy.' : 'The list of counts and hashes is not beside the copy: compare by hand.')
  }
  catch (error) {
    explain(error)
    process.exitCode = 1
  }
  await kept?.stop()
}
