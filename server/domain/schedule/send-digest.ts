import { and, arrayOverlaps, asc, isNull, lte, ne } from 'drizzle-orm'
import { eveningInstants } from '#shared/publication-slots'
import { alerts, people } from '~~/server/database/schema'
import { digestLetter } from '~~/server/mail/digest-letter'
import { queueMail } from '~~/server/mail/queue-mail'
import type { Deps } from '../context'
import { readSettings } from '../settings/read-settings'
import { readNight } from './read-night'
import type { Slot } from './slot'
import { claimSlot, finishSlot, lateness } from './slot'

/** A night lasts this long from its digest; later than that a digest is of no use. */
const nightMs = 12 * 3600_000
const dayMs = 24 * 3600_000

/** The digest of the night that has begun goes to every operator and to flight dynamics, once. */
export async function sendDigest(given: Deps): Promise<void> {
  const { organisation, digestZone, digestAt } = await readSettings(given.db)
  const due = eveningInstants({ zone: digestZone, publishAt: digestAt }, given.now.getTime() - 2 * dayMs, given.now.getTime() + 1).at(-1)!
  const instant = new Date(due)
  await given.db.transaction(async (tx) => {
    const deps = { ...given, db: tx }
    // Whoever came after the night's start was not there to miss it.
    const recipients = await tx.select({ name: people.name, address: people.email, zone: people.zone }).from(people)
      .where(and(isNull(people.disabledAt), arrayOverlaps(people.roles, ['operator', 'flight-dynamics']), lte(people.createdAt, instant))).orderBy(people.email)
    const slot: Slot = { kind: 'digest', entity: 'all', instant }
    if (recipients.length === 0 || !await claimSlot(deps, slot)) return
    if (deps.now.getTime() - due >= nightMs) return finishSlot(deps, slot, `Missed: found ${lateness(instant, deps.now)}, when the night was over.`)
    const to = new Date(due + nightMs)
    const night = await readNight(deps, instant, to)
    const standing = await tx.select({ title: alerts.title }).from(alerts).where(ne(alerts.state, 'closed')).orderBy(asc(alerts.openedAt))
    for (const { zone, ...person } of recipients) {
      const letter = digestLetter({ organisation, zone, from: instant, to, ...night, standingAlerts: standing.map(({ title }) => title), now: deps.now })
      await queueMail(deps, { kind: 'digest', to: person, ...letter })
    }
    await finishSlot(deps, slot, `Mailed to ${recipients.length === 1 ? '1 person' : `${recipients.length} people`}, ${lateness(instant, deps.now)}.`)
  })
}
