import { readdirSync } from 'node:fs'
import { createRequire } from 'node:module'
import { join } from 'node:path'
import type { AxeBuilder as Axe } from '@axe-core/playwright'
import pg from 'pg'
import type { Page } from 'playwright-core'
import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { root } from '../../server/cli/lib/paths.mjs'
import type { TestBrowser, WatchedPage } from '../support/browser'
import { launchBrowser } from '../support/browser'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import type { TestServer } from '../support/server'
import { demoPassword, startServer } from '../support/server'

// The package's ES module form loses its class under the test runner.
const { AxeBuilder } = createRequire(import.meta.url)('@axe-core/playwright') as { AxeBuilder: typeof Axe }

/** Every page file, and an address of the demo that shows it; `null` where the reason says why not. */
const addresses: Record<string, string | null | (() => Promise<string>)> = {
  'index.vue': '/',
  'sign-in.vue': '/sign-in?again',
  // A one-time address opens it; without one it says so.
  'welcome.vue': '/welcome',
  'me.vue': '/me',
  'methods.vue': '/methods',
  'alerts/index.vue': '/alerts',
  'alerts/[id].vue': () => first('SELECT \'/alerts/\' || id AS path FROM alerts ORDER BY opened_at LIMIT 1'),
  'bench/index.vue': '/bench',
  'demo/mail.vue': '/demo/mail',
  'developers.vue': '/developers',
  'elements/index.vue': '/elements',
  'elements/[spacecraftId].vue': () => first('SELECT \'/elements/\' || spacecraft_id AS path FROM element_sets WHERE state = \'in-use\' LIMIT 1'),
  'fleet/index.vue': '/fleet',
  'fleet/[id]/index.vue': () => first('SELECT \'/fleet/\' || id AS path FROM spacecraft ORDER BY name LIMIT 1'),
  'fleet/[id]/links/[linkId].vue': () => first('SELECT \'/fleet/\' || spacecraft_id || \'/links/\' || id AS path FROM links ORDER BY name LIMIT 1'),
  'fleet/[id]/links/new.vue': () => first('SELECT \'/fleet/\' || id || \'/links/new\' AS path FROM spacecraft ORDER BY name LIMIT 1'),
  'passes/index.vue': '/passes',
  'passes/[id].vue': () => first('SELECT \'/passes/\' || p.id AS path FROM passes p JOIN tables t ON t.pass_id = p.id WHERE p.gone_at IS NULL AND p.aos > now() ORDER BY p.aos LIMIT 1'),
  'print/shift.vue': '/print/shift',
  'print/table/[id].vue': () => first('SELECT \'/print/table/\' || t.id AS path FROM passes p JOIN tables t ON t.pass_id = p.id WHERE p.gone_at IS NULL AND p.aos > now() ORDER BY p.aos LIMIT 1'),
  'settings.vue': null, // The frame around the pages below.
  'settings/index.vue': '/settings',
  'settings/audit.vue': '/settings/audit',
  'settings/keys.vue': '/settings/keys',
  'settings/mail.vue': '/settings/mail',
  'settings/people.vue': '/settings/people',
  'settings/schedule.vue': '/settings/schedule',
  'settings/servers.vue': '/settings/servers',
  'settings/web-hooks/index.vue': '/settings/web-hooks',
  'settings/web-hooks/[id].vue': () => first('INSERT INTO web_hooks (name, url, secret, events, created_by) VALUES (\'Rota board\', \'https://board.ops.example/told\', \'whsec_MDEyMzQ1Njc4OWFiY2RlZjAxMjM0NTY3\', ARRAY[\'alert.opened\'], \'Test\') RETURNING \'/settings/web-hooks/\' || id AS path'),
  'stations/index.vue': '/stations',
  'stations/[id].vue': () => first('SELECT \'/stations/\' || id AS path FROM stations ORDER BY name LIMIT 1'),
  'stations/new.vue': '/stations/new',
}

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
  watched = await browser.newPage({ reducedMotion: 'reduce' })
  page = watched.page
  page.setDefaultTimeout(30_000)
  await page.goto(`${server.url}/sign-in`, { waitUntil: 'networkidle' })
  await page.getByLabel('E-mail address').fill('admin@tern-bay.example')
  await page.getByLabel('Password').fill(demoPassword)
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.getByRole('heading', { name: 'Tonight' }).waitFor()
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
  await sql?.end()
  await database?.drop()
})

/** The first answer's path, once the server has computed what it leads to. */
async function first(query: string): Promise<string> {
  for (const until = Date.now() + 60_000; Date.now() < until; await page.waitForTimeout(500)) {
    const { rows } = await sql.query<{ path: string }>(query)
    if (rows[0]) return rows[0].path
  }
  throw new Error(`Nothing within a minute for: ${query}`)
}

const files = readdirSync(join(root, 'app/pages'), { recursive: true, encoding: 'utf8' }).filter(name => name.endsWith('.vue'))

it('every page has an address here', () => {
  expect(files.sort(), 'Add the new page to `addresses` above, with an address of the demo that shows it.').toEqual(Object.keys(addresses).sort())
})

describe.each(Object.entries(addresses).filter(([, address]) => address !== null))('%s', (_file, address) => {
  it('breaks no rule of accessibility in any theme, fits 320 px, and leaves the console quiet', async () => {
    watched.problems.length = 0
    const path = typeof address === 'function' ? await address() : address!
    await page.setViewportSize({ width: 1366, height: 768 })
    await page.goto(server.url + path, { waitUntil: 'networkidle' })
    await page.locator('h1').first().waitFor()
    const broken: string[] = []
    for (const theme of ['day', 'night', 'low-light']) {
      await page.evaluate((name) => { document.documentElement.dataset.theme = name }, theme)
      // Its ordinary mode opens a page of its own each time, and only frames of other origins need that.
      const axe = new AxeBuilder({ page }).setLegacyMode(true).options({ resultTypes: ['violations'] }).withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'])
      // Only colours differ from theme to theme.
      if (theme !== 'day') axe.withRules('color-contrast')
      const { violations } = await axe.analyze()
      broken.push(...violations.map(({ id, nodes }) => `${theme}: ${id} at ${nodes.map(({ target }) => target.join(' ')).slice(0, 3).join(', ')}`))
    }
    expect(broken).toEqual([])
    await page.setViewportSize({ width: 320, height: 700 })
    await expect.poll(() => page.evaluate(() => document.documentElement.scrollWidth), { message: `${path} is wider than 320 px` }).toBeLessThanOrEqual(320)
    expect(watched.problems).toEqual([])
  })
})
