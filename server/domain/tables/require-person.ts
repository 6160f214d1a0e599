import type { Actor, PersonActor } from '../context'
import { DomainError } from '../errors'

/** Decisions on tables have a person's name behind them; no key makes them. */
export function requirePerson(actor: Actor): PersonActor {
  if (actor.kind !== 'person') throw new DomainError('not-allowed', 'Decisions on tables are made by people, not by keys.')
  return actor
}
