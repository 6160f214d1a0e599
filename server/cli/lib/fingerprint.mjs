/**
 * @typedef {{ rows: number, md5: string }} TableFingerprint
 * @typedef {Record<string, TableFingerprint>} Fingerprint by schema and table
 */

/** Who runs at the moment is no part of what is kept: restored elsewhere it would be a call about servers that are not there. */
export const leftOut = ['public.servers']

/**
 * Counts and hashes of every table: an MD5 over the MD5s of all rows as text, in an order of their own. Two databases
 * with the same content give the same, whatever lies where on disk.
 *
 * @param {import('pg').ClientBase} client in a transaction that sees one state
 * @returns {Promise<Fingerprint>}
 */
export async function fingerprint(client) {
  // What a value looks like as text depends on these.
  await client.query(`SET LOCAL TimeZone = 'UTC'; SET LOCAL DateStyle = 'ISO'; SET LOCAL IntervalStyle = 'postgres'; SET LOCAL extra_float_digits = 1; SET LOCAL bytea_output = 'hex'; SET LOCAL statement_timeout = 0`)
  const { rows: tables } = await client.query(`
    SELECT n.nspname AS schema, c.relname AS name FROM pg_class c JOIN pg_namespace n ON n.oid = c.relnamespace
    WHERE c.relkind = 'r' AND n.nspname IN ('public', 'pgboss', 'drizzle') ORDER BY 1, 2`)
  /** @type {Fingerprint} */
  const found = {}
  for (const { schema, name } of tables) {
    const key = `${schema}.${name}`
    if (leftOut.includes(key)) continue
    const { rows: [row] } = await client.query(`SELECT count(*)::int AS rows, md5(coalesce(string_agg(hash, '' ORDER BY hash), '')) AS md5 FROM (SELECT md5(t::text) AS hash FROM ${client.escapeIdentifier(schema)}.${client.escapeIdentifier(name)} t) hashes`)
    found[key] = { rows: row.rows, md5: row.md5 }
  }
  return found
}

/**
 * @param {Fingerprint} one
 * @param {Fingerprint} other
 * @returns {string[]} what differs, in words
 */
export function differences(one, other) {
  return [...new Set([...Object.keys(one), ...Object.keys(other)])].sort().flatMap((table) => {
    const [before, after] = [one[table], other[table]]
    if (before?.rows === after?.rows && before?.md5 === after?.md5) return []
    return [`${table}: ${before ? `${before.rows} rows, ${before.md5}` : 'missing'}; now ${after ? `${after.rows} rows, ${after.md5}` : 'missing'}`]
  })
}

/** @param {Fingerprint} found @returns {string} a table of it, for people */
export function printFingerprint(found) {
  const width = Math.max(...Object.keys(found).map(name => name.length))
  return Object.entries(found).map(([name, { rows, md5 }]) => `  ${name.padEnd(width)}  ${String(rows).padStart(9)}  ${md5}`).join('\n')
}
