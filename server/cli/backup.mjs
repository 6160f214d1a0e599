import { existsSync, renameSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { fileURLToPath } from 'node:url'
import { resolve } from 'node:path'
import { writeWhole } from './lib/files.mjs'
import { fingerprint, leftOut, printFingerprint } from './lib/fingerprint.mjs'
import { connect, openKeptDatabase, runTool } from './lib/kept-database.mjs'
import { Refusal, explain, step } from './lib/say.mjs'

/**
 * Writes all that the product keeps into one file (PostgreSQL's custom format) while it runs, with a list of every
 * table's count and hash beside it. Both are of one instant.
 *
 * @param {string} url
 * @param {string} file
 * @returns {Promise<import('./lib/fingerprint.mjs').Fingerprint>}
 */
export async function backup(url, file) {
  if (existsSync(file)) throw new Refusal(`${file} is there already: name another, or move it away.`)
  const client = await connect(url)
  const draft = `${file}.new`
  // Made before it is filled, so that nobody else reads it meanwhile.
  writeFileSync(draft, '', { mode: 0o600 })
  try {
    await client.query('BEGIN ISOLATION LEVEL REPEATABLE READ READ ONLY')
    const { rows: [{ snapshot }] } = await client.query('SELECT pg_export_snapshot() AS snapshot')
    const [found] = await Promise.all([
      fingerprint(client),
      runTool('pg_dump', url, ['--format=custom', `--snapshot=${snapshot}`, '--no-owner', '--no-privileges', ...leftOut.map(table => `--exclude-table-data=${table}`), `--file=${draft}`]),
    ])
    if (!found['drizzle.__drizzle_migrations']) throw new Refusal('This database holds no Nullbeat: check DATABASE_URL.')
    writeWhole(`${file}.json`, `${JSON.stringify(found, null, 2)}\n`, 0o600)
    renameSync(draft, file)
    return found
  }
  finally {
    rmSync(draft, { force: true })
    await client.end()
  }
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  /** @type {{ stop: () => Promise<void> } | undefined} */
  let kept
  try {
    const [given, ...more] = process.argv.slice(2)
    if (!given || more.length > 0) throw new Refusal('Say where to: npm run backup -- FILE')
    const file = resolve(given)
    const opened = await openKeptDatabase()
    kept = opened
    step('Writing the copy')
    const found = await backup(opened.url, file)
    console.log(printFingerprint(found))
    step(`${file} (${statSync(file).size.toLocaleString('en-GB')} bytes), counts and hashes in ${file}.json. Keep both where only administrators read them: they hold secrets.`)
  }
  catch (error) {
    explain(error)
    process.exitCode = 1
  }
  await kept?.stop()
}
