import { createHash } from 'node:crypto'
import { createServer } from 'node:http'
import type { AddressInfo } from 'node:net'
import { eq } from 'drizzle-orm'
import { createApp, createRouter, toNodeListener } from 'h3'
import { expect } from 'vitest'
import calendarHandler from '../../server/api/calendars/[token].get'
import stationCalendarHandler from '../../server/api/station/v1/calendar.ics.get'
import keysHandler from '../../server/api/station/v1/keys.get'
import tableHandler from '../../server/api/station/v1/tables/[id]/index.get'
import reportHandler from '../../server/api/station/v1/tables/[id]/report.post'
import listHandler from '../../server/api/station/v1/tables/index.get'
import type { Db } from '../../server/database/client'
import { databaseNow, useDatabase } from '../../server/database/client'
import { apiKeys, passes, tables } from '../../server/database/schema'
import { scheduleActor } from '../../server/domain/context'
import { publishRevision } from '../../server/domain/tables/publish-revision'
import { createTestDatabase } from './database'
import type { SpacecraftFixture, StationFixture } from './fixtures'
import { addPass, addRevision, addSpacecraft, addStation, addTable, presentDigest } from './fixtures'

export interface FeedServer {
  /** Of the server, without a slash at its end. */
  url: string
  db: Db
  now: Date
  craft: SpacecraftFixture
  station: StationFixture
  /** Publishes a new table of the station, an hour after the one before unless told otherwise. */
  publish: (given?: Parameters<typeof addTable>[4], aos?: Date) => Promise<Awaited<ReturnType<typeof addTable>>>
  /** Publishes a next revision of a table. */
  republish: (table: { id: string }, number: number, given?: Partial<Parameters<typeof addRevision>[3]>) => Promise<void>
  addKey: (stationId: string, key: string) => Promise<unknown>
  close: () => Promise<void>
}

/** The station's routes over a real connection, through the real handlers, on a database of their own with one station and one spacecraft. */
export async function startFeed(stationGiven: Parameters<typeof addStation>[1] = {}): Promise<FeedServer> {
  const test = await createTestDatabase()
  process.env.DATABASE_URL = test.url
  process.env.NUXT_SESSION_PASSWORD = 'a-session-secret-only-for-the-tests-0001'
  const router = createRouter()
    .get('/api/station/v1/tables', listHandler).get('/api/station/v1/tables/:id', tableHandler).head('/api/station/v1/tables/:id', tableHandler)
    .post('/api/station/v1/tables/:id/report', reportHandler).get('/api/station/v1/keys', keysHandler)
    .get('/api/station/v1/calendar.ics', stationCalendarHandler).get('/api/calendars/:token', calendarHandler)
  const server = createServer(toNodeListener(createApp().use(router)))
  await new Promise<void>(resolve => server.listen(0, '127.0.0.1', resolve))
  const { db } = useDatabase()
  const now = await databaseNow(db)
  const craft = await addSpacecraft(db, now)
  const station = await addStation(db, stationGiven)
  const goOut = async (tableId: string) => expect(await publishRevision({ db, now, actor: scheduleActor }, { tableId, mover: 'schedule' })).toMatchObject({ outcome: 'published' })

  let hours = 0
  return {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`, db, now, craft, station,
    publish: async (given = {}, aos = new Date(now.getTime() + ++hours * 3600_000)) => {
      const pass = await addPass(db, craft, station, aos)
      const table = await addTable(db, craft, station, pass, { state: 'approved', inputsDigest: await presentDigest(db, now, craft, station), ...given })
      await goOut(table.id)
      return table
    },
    republish: async (table, number, given = {}) => {
      const [pass] = await db.select({ aos: passes.aos }).from(passes).innerJoin(tables, eq(tables.passId, passes.id)).where(eq(tables.id, table.id))
      await addRevision(db, craft, station, { tableId: table.id, aos: pass!.aos, number, state: 'approved', inputsDigest: await presentDigest(db, now, craft, station), ...given })
      await goOut(table.id)
    },
    addKey: (stationId, key) => db.insert(apiKeys).values({ name: 'Controller', prefix: key.slice(0, 11), keyHash: createHash('sha256').update(key).digest('hex'), scope: 'station', stationId }),
    close: async () => {
      server.closeAllConnections()
      server.close()
      await useDatabase().close()
      await test.drop()
    },
  }
}
