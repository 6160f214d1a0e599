import { and, eq, inArray, isNull, lt, or, sql } from 'drizzle-orm'
import { servers } from '~~/server/database/schema'
import type { Deps } from '../context'

export interface ServerIdentity { host: string, pid: number, role: 'server' | 'worker' }

/** The database's clock, never a shifted one: silence is a matter of real time. */
const clock = sql`clock_timestamp()`
const keptDays = 30

/**
 * Enters a process that has just started. Where one of the same kind on the same host has died, this one is what has
 * been started in its place: nobody need be called for that one any more.
 */
export async function announceServer({ db }: Pick<Deps, 'db'>, me: ServerIdentity, isAlive: (pid: number) => boolean): Promise<string> {
  return db.transaction(async (tx) => {
    await tx.delete(servers).where(or(lt(servers.stoppedAt, sql`${clock} - make_interval(days => ${keptDays})`), lt(servers.seenAt, sql`${clock} - make_interval(days => ${keptDays})`)))
    const before = await tx.select({ id: servers.id, pid: servers.pid }).from(servers).where(and(eq(servers.host, me.host), eq(servers.role, me.role), isNull(servers.stoppedAt)))
    const dead = before.filter(({ pid }) => pid === me.pid || !isAlive(pid)).map(({ id }) => id)
    if (dead.length > 0) await tx.update(servers).set({ stoppedAt: clock }).where(inArray(servers.id, dead))
    const [row] = await tx.insert(servers).values({ ...me, startedAt: clock, seenAt: clock }).returning({ id: servers.id })
    return row!.id
  })
}

/** Says that the process lives; false where it has been forgotten meanwhile, and has to announce itself anew. */
export async function beatServer({ db }: Pick<Deps, 'db'>, id: string): Promise<boolean> {
  const rows = await db.update(servers).set({ seenAt: clock, stoppedAt: null }).where(eq(servers.id, id)).returning({ id: servers.id })
  return rows.length === 1
}

/** Ended on purpose: nobody waits for it. */
export async function endServer({ db }: Pick<Deps, 'db'>, id: string): Promise<void> {
  await db.update(servers).set({ stoppedAt: clock }).where(and(eq(servers.id, id), isNull(servers.stoppedAt)))
}
