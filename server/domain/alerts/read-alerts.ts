import { and, desc, eq, inArray, ne, sql } from 'drizzle-orm'
import { z } from 'zod'
import type { AlertOut } from '#shared/schemas/alerts'
import { alerts, mails, spacecraft, stations, tables } from '~~/server/database/schema'
import type { Db } from '~~/server/database/client'
import type { Deps } from '../context'
import { cursorInstant, readCursor, toPage } from '../cursor'
import { DomainError } from '../errors'

export interface AlertsQuery { state?: 'open' | 'acknowledged' | 'closed' | 'standing', limit: number, cursor?: string }

const form = z.tuple([cursorInstant, z.uuid()])

/** Newest first, with names and what became of their mails. */
export async function listAlerts({ db }: Pick<Deps, 'db'>, { state, limit, cursor }: AlertsQuery): Promise<{ items: AlertOut[], nextCursor: string | null }> {
  const after = readCursor(cursor, form)
  const rows = await select(db)
    .where(and(
      state === 'standing' ? ne(alerts.state, 'closed') : state ? eq(alerts.state, state) : undefined,
      after ? sql`(${alerts.openedAt}, ${alerts.id}) < (${after[0]}::timestamptz, ${after[1]}::uuid)` : undefined,
    ))
    .orderBy(desc(alerts.openedAt), desc(alerts.id))
    .limit(limit + 1)
  const page = toPage(rows, limit, ({ alert }) => [alert.openedAt.toISOString(), alert.id])
  return { items: await withMails(db, page.rows), nextCursor: page.nextCursor }
}

export async function readAlert({ db }: Pick<Deps, 'db'>, alertId: string): Promise<AlertOut> {
  const [alert] = await withMails(db, await select(db).where(eq(alerts.id, alertId)))
  if (!alert) throw new DomainError('not-found', 'There is no such alert.')
  return alert
}

function select(db: Db) {
  return db.select({ alert: alerts, spacecraftName: spacecraft.name, stationName: stations.name, passId: tables.passId }).from(alerts)
    .leftJoin(spacecraft, eq(spacecraft.id, alerts.spacecraftId))
    .leftJoin(stations, eq(stations.id, alerts.stationId))
    .leftJoin(tables, eq(tables.id, alerts.tableId))
}
type Row = Awaited<ReturnType<typeof select>>[number]

const iso = (instant: Date | null) => instant?.toISOString() ?? null

async function withMails(db: Db, rows: readonly Row[]): Promise<AlertOut[]> {
  if (rows.length === 0) return []
  const sent = await db.select().from(mails).where(inArray(mails.alertId, rows.map(({ alert }) => alert.id))).orderBy(mails.createdAt, mails.toAddress)
  return rows.map(({ alert, spacecraftName, stationName, passId }) => ({
    id: alert.id, kind: alert.kind, severity: alert.severity, state: alert.state, title: alert.title, detail: alert.detail, action: alert.action,
    spacecraftId: alert.spacecraftId, spacecraftName, stationId: alert.stationId, stationName, tableId: alert.tableId, passId,
    dueAt: iso(alert.dueAt), count: alert.count, openedAt: alert.openedAt.toISOString(),
    acknowledgedAt: iso(alert.acknowledgedAt), acknowledgedBy: alert.acknowledgedBy, closedAt: iso(alert.closedAt), closedBy: alert.closedBy, closeReason: alert.closeReason,
    mails: sent.filter(mail => mail.alertId === alert.id).map(mail => ({ to: mail.toName, state: mail.state, attempts: mail.attempts, lastError: mail.lastError, sentAt: iso(mail.sentAt) })),
  }))
}
