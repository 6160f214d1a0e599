import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import type { settingsOut } from '#shared/schemas/settings'
import { mails } from '~~/server/database/schema'
import type { Deps } from '../context'
import { mailIsLocal } from '../mails/mail-is-local'
import { readSettings } from './read-settings'

/** The settings, and how the server stands: whether it is the demo, where mail goes and how much waits. */
export async function settingsOverview({ db }: Pick<Deps, 'db'>): Promise<z.infer<typeof settingsOut>> {
  return {
    settings: await readSettings(db),
    demo: process.env.NULLBEAT_DEMO === '1',
    mail: { local: mailIsLocal(), queued: await db.$count(mails, eq(mails.state, 'queued')), failed: await db.$count(mails, eq(mails.state, 'failed')) },
  }
}
