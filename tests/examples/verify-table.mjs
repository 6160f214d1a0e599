// Fetches a station's table and checks its digest (SHA-256 of canonical JSON, RFC 8785) and signature (detached JWS, Ed25519).
// NULLBEAT_URL=https://nullbeat.ops.example NULLBEAT_KEY=nb_… node verify-table.mjs TABLE-ID
import { createHash, createPublicKey, verify } from 'node:crypto'

const canonical = value => Array.isArray(value)
  ? `[${value.map(canonical)}]`
  : value !== null && typeof value === 'object' ? `{${Object.keys(value).sort().map(name => `${JSON.stringify(name)}:${canonical(value[name])}`)}}` : JSON.stringify(value)

/** The table, if digest and signature are its own and a key of the set has signed it; else an error. */
export function verifyTable(text, { keys }) {
  const { digest, signature, ...table } = JSON.parse(text)
  const bytes = Buffer.from(canonical(table))
  if (createHash('sha256').update(bytes).digest('hex') !== digest) throw new Error('The digest is not that of the table.')
  const [header, , mark] = signature.split('.')
  const { alg, kid } = JSON.parse(Buffer.from(header, 'base64url'))
  const key = keys.find(candidate => candidate.kid === kid)
  if (alg !== 'EdDSA' || !key) throw new Error(`No key ${kid}: fetch the keys again.`)
  const signed = Buffer.from(`${header}.${bytes.toString('base64url')}`)
  if (!verify(null, signed, createPublicKey({ key, format: 'jwk' }), Buffer.from(mark, 'base64url'))) throw new Error('The signature does not verify.')
  return table
}

if (process.argv[1]?.endsWith('/verify-table.mjs')) {
  const get = async path => (await fetch(`${process.env.NULLBEAT_URL}/api/station/v1${path}`, { headers: { authorization: `Bearer ${process.env.NULLBEAT_KEY}`, accept: 'application/json' } })).text()
  const table = verifyTable(await get(`/tables/${process.argv[2]}`), JSON.parse(await get('/keys')))
  console.log(`Revision ${table.revision} for ${table.pass.spacecraft.name}, ${table.retunes.length} retunes: digest and signature hold.`)
}
