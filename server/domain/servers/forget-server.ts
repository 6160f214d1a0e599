import { eq, sql } from 'drizzle-orm'
import { servers } from '~~/server/database/schema'
import { reconcileAlerts } from '../alerts/reconcile-alerts'
import { recordAudit } from '../audit'
import { requireFound } from '../catalogue/require-row'
import type { Deps } from '../context'
import { DomainError } from '../errors'
import { silentAfterMs } from './server-times'

/** A silent process that will not come back is counted as stopped, and its alert closes. */
export async function forgetServer(deps: Deps, id: string): Promise<void> {
  await deps.db.transaction(async (tx) => {
    const inner = { ...deps, db: tx }
    const [row] = await tx.select({ host: servers.host, pid: servers.pid, stoppedAt: servers.stoppedAt, silent: sql<boolean>`${servers.seenAt} < clock_timestamp() - make_interval(secs => ${silentAfterMs / 1000})` }).from(servers).where(eq(servers.id, id)).for('update')
    const server = requireFound(row, 'server')
    if (server.stoppedAt) return
    if (!server.silent) throw new DomainError('conflict', 'This process is alive: stop it on its host first.')
    await tx.update(servers).set({ stoppedAt: sql`clock_timestamp()` }).where(eq(servers.id, id))
    await recordAudit(inner, { action: 'server.forget', entityKind: 'server', entityId: id, before: { stopped: false }, after: { stopped: true, host: server.host, pid: server.pid } })
    await reconcileAlerts(inner, { kinds: ['server-silent'] })
  })
}
