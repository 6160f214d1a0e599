import { setTimeout as wait } from 'node:timers/promises'
import { sql } from 'drizzle-orm'
import { addKey } from '../api/actors'
import type { Database } from '../../server/database/client'
import { openDatabase } from '../../server/database/client'
import type { UploadOut } from '../../shared/schemas/elements'
import { createTestDatabase } from './database'
import { manySets } from './many-sets'
import { startServer } from './server'

export interface KilledUpload {
  afterMs: number
  /** What the sender was told before the server died, if anything. */
  answered: number | null
  /** Right after the kill: uploads that hold some of their sets, but neither all nor none. */
  partial: number
  /** After the restart: sets held for good of one that had been answered; null for one that had not. */
  keptOfAnswered: number | null
  /** After the sender has tried again. */
  heldInTheEnd: number
  count: number
}

/** Kills the server once during each of so many uploads, starts it again and tries again. */
export async function killUploads(kills: number, random: () => number): Promise<KilledUpload[]> {
  const made = await createTestDatabase()
  const database = openDatabase(made.url, { max: 2 })
  const key = await addKey(database.db, 'elements:write')
  const outcomes: KilledUpload[] = []
  try {
    const msPerSet = await paceOf(made.url, key)
    for (let kill = 0; kill < kills; kill++) {
      // By turns one that is answered when it is stored, and one that is answered when it is received.
      const count = kill % 2 === 0 ? 6000 : 12_000
      // Moments spread over the whole of it and a little beyond.
      const share = 1.1 * (kill + random()) / kills
      outcomes.push(await killOne(made.url, database, key, { count, from: (kill + 1) * 20_000 }, share * count * msPerSet))
    }
    return outcomes
  }
  finally {
    await database.close()
    await made.drop()
  }
}

/** How long a set takes here and now. */
async function paceOf(databaseUrl: string, key: Record<string, string>): Promise<number> {
  const count = 6000
  const server = await startServer({ databaseUrl })
  try {
    const begun = performance.now()
    await (await fetch(`${server.url}/api/element-sets/uploads`, { method: 'POST', headers: { ...key, 'content-type': 'text/plain' }, body: new Uint8Array(manySets({ count })) })).arrayBuffer()
    return (performance.now() - begun) / count
  }
  finally {
    await server.stop()
  }
}

async function killOne(databaseUrl: string, database: Database, key: Record<string, string>, range: { count: number, from: number }, afterMs: number): Promise<KilledUpload> {
  const body = manySets(range)
  const send = (url: string) => fetch(`${url}/api/element-sets/uploads`, { method: 'POST', headers: { ...key, 'content-type': 'text/plain' }, body: new Uint8Array(body) })
  const before = await heldSets(database)
  const server = await startServer({ databaseUrl })
  const sent = send(server.url).then(async response => ({ status: response.status, id: (await response.json() as { id: string }).id })).catch(() => null)
  await wait(afterMs)
  server.kill()
  const answer = await sent
  const partial = await partialUploads(database)

  const again = await startServer({ databaseUrl })
  try {
    await until(async () => Number((await database.db.execute<{ count: string }>(sql`SELECT count(*) FROM element_uploads WHERE state = 'reading'`)).rows[0]!.count) === 0)
    const keptOfAnswered = answer ? await heldSets(database) - before : null
    const response = await send(again.url)
    const { id } = await response.json() as { id: string }
    let report: UploadOut
    await until(async () => {
      report = await (await fetch(`${again.url}/api/element-sets/uploads/${id}`, { headers: key })).json() as UploadOut
      return report.state === 'finished'
    })
    if (report!.accepted + report!.alreadyHeld !== range.count) throw new Error(`The report counts ${report!.accepted} accepted and ${report!.alreadyHeld} held of ${range.count}.`)
    return { afterMs: Math.round(afterMs), answered: answer?.status ?? null, partial, keptOfAnswered, heldInTheEnd: await heldSets(database) - before, count: range.count }
  }
  finally {
    await again.stop()
  }
}

const heldSets = async ({ db }: Database) => Number((await db.execute<{ count: string }>(sql`SELECT count(*) FROM element_sets`)).rows[0]!.count)

/** Uploads whose sets are neither as many as their report says nor, without a report, none. */
async function partialUploads({ db }: Database): Promise<number> {
  const { rows } = await db.execute<{ count: string }>(sql`
    SELECT count(*) FROM element_uploads AS upload
    WHERE (SELECT count(*) FROM element_sets WHERE upload_id = upload.id) <> CASE upload.state WHEN 'finished' THEN upload.accepted ELSE 0 END`)
  return Number(rows[0]!.count)
}

async function until(holds: () => Promise<boolean>): Promise<void> {
  for (const deadline = Date.now() + 120_000; !await holds(); await wait(200)) if (Date.now() > deadline) throw new Error('It did not come to an end within two minutes.')
}
