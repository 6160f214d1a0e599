import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import pg from 'pg'
import type { Page } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { root } from '../../server/cli/lib/paths.mjs'
import { readElements } from '../../shared/formats/elements/read-elements'
import { writeElements } from '../../shared/formats/elements/write/write-elements'
import type { MeanElements } from '../../shared/physics/types'
import type { TestBrowser, WatchedPage } from '../support/browser'
import { launchBrowser } from '../support/browser'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import type { TestServer } from '../support/server'
import { demoPassword, startServer } from '../support/server'

/** A night's file at the element desk, by keyboard alone: no pointer touches the page after signing in. */
let database: TestDatabase
let server: TestServer
let browser: TestBrowser
let sql: pg.Client
let watched: WatchedPage
let page: Page

beforeAll(async () => {
  database = await createTestDatabase()
  sql = new pg.Client({ connectionString: database.url })
  await sql.connect()
  server = await startServer({ databaseUrl: database.url, demo: true })
  browser = await launchBrowser()
  watched = await browser.newPage()
  page = watched.page
  page.setDefaultTimeout(30_000)
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
  await sql?.end()
  await database?.drop()
})

/** An hour on: the epoch, and the mean anomaly with it. */
function anHourOn(e: MeanElements, aheadDeg = 0): MeanElements {
  return { ...e, epochUtcUs: e.epochUtcUs + 3_600_000_000, meanAnomalyDeg: (e.meanAnomalyDeg + 15 * e.meanMotionRevPerDay + aheadDeg) % 360 }
}

interface Night { text: string, good: string, jumped: string, foreign: string }

async function nightFile(): Promise<Night> {
  const { rows } = await sql.query<{ name: string, elements: MeanElements }>(`
    SELECT s.name, e.elements FROM spacecraft s JOIN element_sets e ON e.id = s.in_use_set_id
    WHERE NOT EXISTS (SELECT 1 FROM element_sets w WHERE w.spacecraft_id = s.id AND w.state = 'waiting') ORDER BY s.name LIMIT 4`)
  const [good, jumped, repeated, broken] = rows
  const reading = readElements(readFileSync(join(root, 'data/reference/sets.tle')), { nowMs: Date.now() })
  if (reading.kind !== 'read' || !broken) throw new Error('The demo has fewer than four spacecraft without a waiting set, or the reference sets cannot be read.')
  const foreign = reading.sets[0]!.elements
  const written = writeElements([anHourOn(good!.elements), anHourOn(jumped!.elements, 3), repeated!.elements, anHourOn(broken.elements), foreign], 'json', { createdMs: Date.now(), originator: 'TEST' })
  if (!written.ok) throw new Error(written.reason)
  const messages = JSON.parse(written.text) as Record<string, unknown>[]
  messages[3]!.ECCENTRICITY = 1.2
  return { text: JSON.stringify(messages, null, 1), good: good!.name, jumped: jumped!.name, foreign: foreign.name! }
}

const focusedName = () => page.evaluate(() => {
  const one = document.activeElement as HTMLElement | null
  return one && one !== document.body ? `${one.getAttribute('aria-label') ?? ''} ${(one as HTMLElement).innerText ?? ''} ${(one as HTMLInputElement).labels?.[0]?.innerText ?? ''}`.trim() : ''
})

/** Goes on by Tab until what has the focus is named so. */
async function tabTo(name: RegExp, most = 120): Promise<void> {
  for (let count = 0; count < most; count++) {
    if (name.test(await focusedName())) return
    await page.keyboard.press('Tab')
  }
  throw new Error(`Tab does not come to ${name}; it stands at “${await focusedName()}”.`)
}

/** Down the list of what waits, then up, until the line of this spacecraft has the focus. */
async function lineOf(name: string): Promise<void> {
  for (const key of [...Array.from({ length: 12 }, () => 'j'), ...Array.from({ length: 12 }, () => 'k')]) {
    if ((await focusedName()).startsWith(name)) return
    await page.keyboard.press(key)
  }
  throw new Error(`J and K do not come to the line of ${name}; the focus is at “${await focusedName()}”.`)
}

const state = async (name: string) => (await sql.query<{ state: string, reason: string | null }>(`
  SELECT e.state, e.reason FROM element_sets e JOIN spacecraft s ON s.id = e.spacecraft_id WHERE s.name = $1 ORDER BY e.created_at DESC, e.epoch DESC LIMIT 1`, [name])).rows[0]!

it('handles good, repeated, broken and foreign sets in under a minute without a pointer', async () => {
  await page.goto(`${server.url}/sign-in`, { waitUntil: 'networkidle' })
  await page.getByLabel('E-mail address').fill('flight@tern-bay.example')
  await page.getByLabel('Password').fill(demoPassword)
  await page.keyboard.press('Enter')
  await page.getByRole('heading', { name: 'Tonight' }).waitFor()
  // The demo's own night is computed first: the minute is the desk's, not the start's.
  for (;;) {
    const { rows } = await sql.query<{ n: number }>('SELECT count(*)::int AS n FROM pgboss.job WHERE name = \'predict\' AND state IN (\'created\', \'retry\', \'active\')')
    if (rows[0]!.n === 0) break
    await page.waitForTimeout(500)
  }
  const night = await nightFile()
  await page.goto(`${server.url}/elements`, { waitUntil: 'networkidle' })

  const started = performance.now()
  await tabTo(/^Paste text/)
  await page.keyboard.press('Enter')
  await expect.poll(focusedName).toMatch(/^Element sets/)
  await page.keyboard.insertText(night.text)
  await page.keyboard.press('Control+Enter')
  await page.getByText('3 accepted, 1 already held, 1 refused.').waitFor()
  // The broken one: its line, the rule and how to mend it stand in the report.
  await page.getByText(/Eccentricity is 1\.2/).waitFor()

  await page.keyboard.press('j')
  await lineOf(night.good)
  await page.keyboard.press('u')
  await page.getByRole('dialog').getByRole('button', { name: 'Put into use' }).waitFor()
  await page.keyboard.press('Enter')
  await page.getByRole('dialog').waitFor({ state: 'hidden' })

  await lineOf(night.jumped)
  await page.keyboard.press('r')
  await page.getByRole('dialog').getByLabel('Reason').waitFor()
  await page.keyboard.press('Control+a')
  await page.keyboard.type('Three degrees ahead: not ours')
  await page.keyboard.press('Enter')
  await page.getByRole('dialog').waitFor({ state: 'hidden' })

  await tabTo(new RegExp(`Choose ${night.foreign}`))
  await page.keyboard.press('Space')
  await page.keyboard.press('Shift+Tab')
  for (let count = 0; count < 12 && !/^Drop$/.test(await focusedName()); count++) await page.keyboard.press('Shift+Tab')
  await page.keyboard.press('Enter')
  await expect.poll(async () => (await sql.query('SELECT state FROM element_sets WHERE name = $1 AND state = \'refused\'', [night.foreign])).rowCount).toBe(1)
  const tookS = (performance.now() - started) / 1000

  expect(await state(night.good)).toMatchObject({ state: 'in-use' })
  expect(await state(night.jumped)).toEqual({ state: 'refused', reason: 'Three degrees ahead: not ours' })
  expect(tookS).toBeLessThan(60)
  expect(watched.problems).toEqual([])
})
