import { isNull } from 'drizzle-orm'
import type { Db } from '~~/server/database/client'
import { spacecraft } from '~~/server/database/schema'
import type { Named } from './match-spacecraft'

/** The spacecraft that fly, by what a set can name them. */
export async function namedSpacecraft(db: Pick<Db, 'select'>): Promise<Named[]> {
  return db.select({ id: spacecraft.id, name: spacecraft.name, number: spacecraft.catalogueNumber, designator: spacecraft.designator })
    .from(spacecraft).where(isNull(spacecraft.retiredAt)).orderBy(spacecraft.id)
}
