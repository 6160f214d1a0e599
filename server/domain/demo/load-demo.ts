import { and, desc, eq } from 'drizzle-orm'
import type { z } from 'zod'
import { createLinkBody } from '#shared/schemas/links'
import { createSpacecraftBody } from '#shared/schemas/spacecraft'
import { createAntennaBody, createRadioBody, createStationBody } from '#shared/schemas/stations'
import scenario from '~~/data/demo/scenario.json'
import { elementSets, links, people, settings, spacecraft, stations } from '~~/server/database/schema'
import { hashPassword } from '../auth/passwords'
import { createAntenna } from '../catalogue/create-antenna'
import { createLink } from '../catalogue/create-link'
import { createRadio } from '../catalogue/create-radio'
import { createSpacecraft } from '../catalogue/create-spacecraft'
import { createStation } from '../catalogue/create-station'
import type { Deps } from '../context'
import { uploadElements } from '../elements/upload-elements'
import { useElementSet } from '../elements/use-element-set'
import { loadInputs } from '../prediction/load-inputs'
import { demoEpochs, demoNightFile } from './demo-elements'
import { limitFor, needsAhead } from './limits-for-demo'

/** Elements in use that are older than this are brought up to date, as a nightly upload would. */
const staleMs = 20 * 3_600_000
const cameAfterMs = 25 * 60_000

/** Loads the invented operator once; each later start brings its people's password and its element sets up to date. */
export async function loadDemo(deps: Deps, password: string): Promise<void> {
  await keepPeople(deps, password)
  const { db } = deps
  const [loaded] = await db.select().from(settings).where(eq(settings.key, 'demoLoaded'))
  if (!loaded) {
    await db.transaction(async (tx) => {
      await loadCatalogue({ ...deps, db: tx })
      await tx.insert(settings).values([{ key: 'demoLoaded', value: deps.now.toISOString() }, { key: 'organisation', value: scenario.organisation }, { key: 'digestZone', value: 'Europe/Oslo' }]).onConflictDoNothing()
    })
  }
  await bringElementsUpToDate(deps)
}

async function keepPeople({ db }: Deps, password: string): Promise<void> {
  const passwordHash = await hashPassword(password)
  for (const person of scenario.people) {
    await db.insert(people).values({ ...person, passwordHash }).onConflictDoUpdate({ target: people.email, set: { passwordHash } })
  }
}

async function loadCatalogue(deps: Deps): Promise<void> {
  for (const { antennas, ...station } of scenario.stations) {
    const { id: stationId } = await createStation(deps, createStationBody.parse(station))
    for (const { radios, ...antenna } of antennas) {
      const { id: antennaId } = await createAntenna(deps, createAntennaBody.parse({ ...antenna, stationId }))
      for (const radio of radios) await createRadio(deps, createRadioBody.parse({ ...radio, antennaId }))
    }
  }
  for (const { orbit: _orbit, links: itsLinks, ...craft } of scenario.spacecraft) {
    const { id: spacecraftId } = await createSpacecraft(deps, createSpacecraftBody.parse(craft))
    for (const link of itsLinks as z.input<typeof createLinkBody>[]) await createLink(deps, createLinkBody.parse({ ...link, spacecraftId }))
  }
}

/** Uploads the nights that are missing and puts each into use, but the newest of those the scenario leaves for a person. */
async function bringElementsUpToDate(deps: Deps): Promise<void> {
  const { db, now } = deps
  const [newest] = await db.select({ epoch: elementSets.epoch }).from(elementSets).innerJoin(spacecraft, eq(spacecraft.inUseSetId, elementSets.id)).orderBy(desc(elementSets.epoch)).limit(1)
  if (newest && now.getTime() - newest.epoch.getTime() < staleMs) return
  const referenceMs = Date.parse(scenario.referenceEpoch)
  const epochs = demoEpochs(now.getTime(), scenario.historyDays).filter(epochMs => !newest || epochMs > newest.epoch.getTime())
  for (const epochMs of epochs) {
    const isLast = epochMs === epochs.at(-1)
    // Each night's file as it would have come, soon after its epoch, so that histories read as an operator's do.
    const thatNight = { ...deps, now: isLast ? now : new Date(epochMs + cameAfterMs) }
    const bytes = Buffer.from(demoNightFile(scenario.spacecraft, referenceMs, epochMs))
    const { sets } = await uploadElements(thatNight, { bytes, source: 'demo', fileName: `night-${new Date(epochMs).toISOString().slice(0, 13)}h.json` })
    for (const set of sets) {
      if (set.state !== 'waiting' || set.spacecraftId === null || (isLast && scenario.leftWaiting.includes(set.spacecraftName ?? ''))) continue
      if (isLast && !newest) await chooseLimits(deps, set.spacecraftId, set.spacecraftName ?? '', set.id)
      await useElementSet(thatNight, { id: set.id })
    }
  }
}

/** Chooses the two stated limits so that the coming day holds a table that breaks and one that is tight. */
async function chooseLimits(deps: Deps, spacecraftId: string, name: string, setId: string): Promise<void> {
  const { db, now } = deps
  for (const outcome of ['breaks', 'tight'] as const) {
    if (scenario[outcome].spacecraft !== name) continue
    const [link] = await db.select().from(links).where(and(eq(links.spacecraftId, spacecraftId), eq(links.name, scenario[outcome].link)))
    if (!link) continue
    const places = await db.select({ id: stations.id }).from(stations)
    const needs: number[] = []
    for (const { id: stationId } of places) needs.push(...needsAhead(await loadInputs(deps, { spacecraftId, stationId }, setId), link.id, now.getTime()))
    const limitHz = limitFor(outcome, needs)
    if (limitHz) await db.update(links).set({ limitHz }).where(eq(links.id, link.id))
  }
}
