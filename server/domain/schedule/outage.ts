import { and, asc, eq, gt, gte, inArray, lte } from 'drizzle-orm'
import { z } from 'zod'
import { formatUtc } from '#shared/utils/format'
import type { Db } from '~~/server/database/client'
import { settings, slots } from '~~/server/database/schema'
import { raiseCause } from '../alerts/raise-cause'
import type { Deps } from '../context'
import { nameSlots } from './name-slots'

/** The schedule wakes every few seconds; with nothing for this long nobody was there. */
const silenceMs = 3 * 60_000
/** Another server that came back at the same time is given this long to do its share before the mail is written. */
const settleMs = 10_000
const mostNamed = 12

const outageSchema = z.object({ from: z.iso.datetime(), to: z.iso.datetime() })
type Outage = z.infer<typeof outageSchema>

const keep = async (db: Db, key: string, value: unknown) => {
  await db.insert(settings).values({ key, value }).onConflictDoUpdate({ target: settings.key, set: { value } })
}
const look = async (db: Db, key: string) => (await db.select({ value: settings.value }).from(settings).where(eq(settings.key, key)).for('update'))[0]?.value

/** Says that the schedule is awake. One clock for all servers: when none has woken for minutes, that was an outage, and it is kept until it is told. */
export async function beginWake({ db, now }: Pick<Deps, 'db' | 'now'>): Promise<void> {
  await db.transaction(async (tx) => {
    const last = z.iso.datetime().safeParse(await look(tx, 'scheduleWokeAt')).data
    if (last === now.toISOString()) return
    await keep(tx, 'scheduleWokeAt', now.toISOString())
    if (!last || now.getTime() - Date.parse(last) < silenceMs) return
    const untold = outageSchema.safeParse(await look(tx, 'scheduleOutage')).data
    await keep(tx, 'scheduleOutage', { from: untold?.from ?? last, to: now.toISOString() } satisfies Outage)
  })
}

/** One alert, and so one mail to each, for all slots whose time came while no server was awake. None for an outage that missed nothing. */
export async function reportOutage(given: Deps): Promise<void> {
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    const outage = outageSchema.safeParse(await look(tx, 'scheduleOutage')).data
    if (!outage || deps.now.getTime() - Date.parse(outage.to) < settleMs) return
    await tx.delete(settings).where(eq(settings.key, 'scheduleOutage'))
    const [from, to] = [new Date(outage.from), new Date(outage.to)]
    const missed = await tx.select().from(slots)
      .where(and(inArray(slots.kind, ['publish-night', 'publish-lead', 'digest']), gt(slots.instant, from), lte(slots.instant, to), gte(slots.doneAt, to))).orderBy(asc(slots.instant), asc(slots.entity))
    if (missed.length === 0) return
    const names = await nameSlots(deps, missed)
    const told = missed.slice(0, mostNamed).map(slot => `${names(slot)}, due ${formatUtc(slot.instant.getTime(), 'minute')}: ${slot.outcome}`)
    if (missed.length > mostNamed) told.push(`And ${missed.length - mostNamed} more.`)
    await raiseCause(deps, {
      kind: 'slots-missed',
      cause: `slots-missed:${outage.from}`,
      severity: 'notice',
      title: missed.length === 1 ? 'A slot of the schedule ran late or not at all' : `${missed.length} slots of the schedule ran late or not at all`,
      detail: `No server was awake from ${formatUtc(from.getTime(), 'second')} to ${formatUtc(to.getTime(), 'second')}, or the database’s clock was set forward. ${told.join(' ')}`,
      action: 'Look through the passes of the coming hours: what is approved has been published; what was missed has lapsed. The list of slots under Settings, Schedule has them all.',
      dueAt: from,
      count: missed.length,
      weight: missed.length,
      raises: true,
    })
  })
}
