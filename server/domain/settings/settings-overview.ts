import { eq } from 'drizzle-orm'
import type { z } from 'zod'
import { may } from '#shared/permissions'
import type { settingsOut } from '#shared/schemas/settings'
import { mails } from '~~/server/database/schema'
import type { Deps } from '../context'
import { mailIsLocal } from '../mails/mail-is-local'
import { readSettings } from './read-settings'

/** The settings, and how the server stands: whether it is the demo, where mail goes and how much waits. */
export async function settingsOverview({ db, actor }: Pick<Deps, 'db' | 'actor'>): Promise<z.infer<typeof settingsOut>> {
  const settings = await readSettings(db)
  // A path of the server is nobody's business but of those who set it.
  const maySee = actor.kind === 'person' && may(actor.roles, 'settings:edit')
  return {
    settings: { ...settings, watchedFolder: maySee ? settings.watchedFolder : null },
    demo: process.env.NULLBEAT_DEMO === '1',
    mail: { local: mailIsLocal(), queued: await db.$count(mails, eq(mails.state, 'queued')), failed: await db.$count(mails, eq(mails.state, 'failed')) },
  }
}
