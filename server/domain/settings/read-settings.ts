import type { Settings } from '#shared/schemas/settings'
import { settingsSchema } from '#shared/schemas/settings'
import type { Db } from '~~/server/database/client'
import { settings } from '~~/server/database/schema'

/** What is set, over the defaults. Rows under keys that are no setting of a person's are left alone. */
export async function readSettings(db: Pick<Db, 'select'>): Promise<Settings> {
  const rows = await db.select({ key: settings.key, value: settings.value }).from(settings)
  return settingsSchema.parse(Object.fromEntries(rows.filter(row => Object.hasOwn(settingsSchema.shape, row.key)).map(row => [row.key, row.value])))
}
