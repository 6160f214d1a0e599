import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { compactVerify, importJWK } from 'jose'
import pg from 'pg'
import type { Locator, Page } from 'playwright-core'
import { afterAll, beforeAll, expect, it } from 'vitest'
import { root } from '../../server/cli/lib/paths.mjs'
import type { TestBrowser, WatchedPage } from '../support/browser'
import { launchBrowser } from '../support/browser'
import type { TestDatabase } from '../support/database'
import { createTestDatabase } from '../support/database'
import type { TestServer } from '../support/server'
import { demoPassword, startServer } from '../support/server'

/** The main job from end to end, as its people do it: each works in a browser of their own, the station by its key. */
const station = 'Kestrel Plain'
const craft = 'SYN-00000'
let database: TestDatabase
let server: TestServer
let browser: TestBrowser
let sql: pg.Client
const watched: WatchedPage[] = []

beforeAll(async () => {
  database = await createTestDatabase()
  sql = new pg.Client({ connectionString: database.url })
  await sql.connect()
  // The uploaded sets are of 30 November 2026; the server's clock is set to the day after, whenever this runs.
  await sql.query('INSERT INTO settings (key, value) VALUES ($1, to_jsonb($2::float8))', ['testClockShiftMs', Date.parse('2026-12-01T12:00:00.000Z') - Date.now()])
  server = await startServer({ databaseUrl: database.url, demo: true })
  browser = await launchBrowser()
})
afterAll(async () => {
  await browser?.close()
  await server?.stop()
  await sql?.end()
  await database?.drop()
})

async function signIn(who: string): Promise<Page> {
  const one = await browser.newPage()
  watched.push(one)
  const { page } = one
  page.setDefaultTimeout(30_000)
  await page.goto(`${server.url}/sign-in`, { waitUntil: 'networkidle' })
  await page.getByLabel('E-mail address').fill(`${who}@tern-bay.example`)
  await page.getByLabel('Password').fill(demoPassword)
  await page.getByRole('button', { name: 'Sign in' }).click()
  await page.getByRole('heading', { name: 'Tonight' }).waitFor()
  return page
}

/** Reloads until it is there: what the server computes in the background shows at the next look. */
async function eventually(page: Page, what: () => Locator, timeoutMs = 120_000): Promise<Locator> {
  const until = Date.now() + timeoutMs
  for (;;) {
    if (await what().first().isVisible().catch(() => false)) return what().first()
    if (Date.now() > until) throw new Error(`Not seen within ${timeoutMs / 1000} s at ${page.url()}: ${await page.locator('main').innerText().then(text => text.slice(0, 1500))}`)
    await page.waitForTimeout(1000)
    await page.reload({ waitUntil: 'networkidle' })
  }
}

let flight: Page, onCall: Page, operator: Page
let passPath = ''
let key = ''

it('flight dynamics uploads a file, makes a spacecraft of one set, puts it into use and sees its passes', async () => {
  flight = await signIn('flight')
  await flight.getByRole('link', { name: 'Elements', exact: true }).click()
  await flight.locator('input[type=file]').setInputFiles(join(root, 'data/reference/sets.tle'))
  await flight.getByText('30 accepted, 0 already held, 0 refused.').waitFor()
  await flight.getByRole('row', { name: new RegExp(craft) }).getByRole('button', { name: 'Make a spacecraft' }).click()
  await flight.getByRole('dialog').getByRole('button', { name: 'Make it' }).click()
  await flight.getByText(`${craft} is in the fleet`).waitFor()
  await flight.getByRole('row', { name: new RegExp(`^${craft}, epoch`) }).press('u')
  await flight.getByRole('dialog').getByRole('button', { name: 'Put into use' }).click()
  await flight.getByText(/In use: .*Passes and tables are being recomputed/).waitFor()
  const { rows } = await sql.query<{ id: string }>('SELECT id FROM spacecraft WHERE name = $1', [craft])
  await flight.goto(`${server.url}/passes?spacecraft=${rows[0]!.id}`, { waitUntil: 'networkidle' })
  await eventually(flight, () => flight.getByRole('row').filter({ hasText: craft }))
})

it('the on-call engineer gives it a link', async () => {
  onCall = await signIn('oncall')
  await onCall.getByRole('link', { name: 'Fleet', exact: true }).click()
  await onCall.getByRole('link', { name: craft }).first().click()
  await onCall.getByRole('link', { name: 'Add a link' }).click()
  const form = onCall.getByRole('form', { name: 'New link' })
  await form.getByLabel('Name').fill('UHF command')
  await form.getByLabel('Direction').selectOption('uplink')
  await form.getByLabel('Modulation').fill('FSK')
  await form.getByLabel('Carrier', { exact: false }).first().fill('449900000')
  await form.getByLabel('Licensed band, lower edge').fill('449875000')
  await form.getByLabel('Licensed band, upper edge').fill('449925000')
  await form.getByLabel('Symbol rate').fill('9600')
  await form.getByRole('radio', { name: 'stated' }).check()
  await form.getByLabel('Stated limit').fill('2500')
  await form.getByRole('button', { name: 'Add the link' }).click()
  await onCall.getByText('UHF command').first().waitFor()
})

it('an operator reviews the table of its next pass, approves and publishes it', async () => {
  operator = await signIn('operator')
  // A pass whose table has not been caught by its own slot: the schedule publishes nothing that nobody approved.
  for (const until = Date.now() + 120_000; passPath === '';) {
    const { rows } = await sql.query<{ pass: string, tuning: string }>(`
      SELECT p.id AS pass, t.id AS tuning FROM tables t JOIN passes p ON p.id = t.pass_id JOIN spacecraft s ON s.id = p.spacecraft_id JOIN stations st ON st.id = p.station_id
      WHERE s.name = $1 AND st.name = $2 AND p.aos > timestamptz '2026-12-01T12:45:00Z' ORDER BY p.aos LIMIT 1`, [craft, station])
    if (rows[0]) passPath = `/passes/${rows[0].pass}?table=${rows[0].tuning}`
    else if (Date.now() > until) throw new Error('The server made no table for the new link within two minutes.')
    else await operator.waitForTimeout(500)
  }
  await operator.goto(server.url + passPath, { waitUntil: 'networkidle' })
  await operator.getByText(/^Holds:/).or(operator.getByText('Holds:')).first().waitFor()
  expect(await operator.getByText(/licen[cs]e/i).first().isVisible()).toBe(true)
  await operator.getByRole('button', { name: 'Approve' }).click()
  await operator.getByRole('button', { name: /^Publish/ }).first().click()
  const confirm = operator.getByRole('dialog').getByRole('button', { name: /^Publish/ })
  await confirm.click()
  await operator.getByText('published', { exact: false }).first().waitFor()
})

it('an administrator makes a key for the station', async () => {
  const admin = await signIn('admin')
  await admin.getByRole('link', { name: 'Settings', exact: true }).click()
  await admin.getByRole('link', { name: 'Keys' }).click()
  await admin.getByRole('button', { name: 'Make a key' }).click()
  const dialog = admin.getByRole('dialog')
  await dialog.getByLabel('Name').fill('Kestrel controller')
  await dialog.getByLabel('Station').selectOption({ label: station })
  await dialog.getByRole('button', { name: 'Make it' }).click()
  key = await admin.locator('[data-key]').innerText()
  expect(key).toMatch(/^nb_\w{40}$/)
})

it('the station fetches the table as JSON and CSV, gets 304 the second time, and the table shows as collected', async () => {
  const ask = (path: string, headers: Record<string, string> = {}) => fetch(server.url + path, { headers: { authorization: `Bearer ${key}`, ...headers } })
  const tableId = new URL(passPath, server.url).searchParams.get('table')!
  const list = await (await ask('/api/station/v1/tables')).json() as { items: { id: string, digest: string }[] }
  const listed = list.items.find(item => item.id === tableId)
  expect(listed).toBeDefined()

  const json = await ask(`/api/station/v1/tables/${tableId}`, { accept: 'application/json' })
  expect(json.status).toBe(200)
  const table = await json.json() as { digest: string, signature: string, retunes: { at: string, frequencyHz: number }[], link: { name: string }, pass: { spacecraft: { name: string } } }
  expect(table.pass.spacecraft.name).toBe(craft)
  expect(table.digest).toBe(listed!.digest)
  // RFC 7515, appendix F: a detached signature verifies once its payload is put back; the payload is canonical JSON (RFC 8785).
  const { digest: _, signature, ...signed } = table
  const { keys: [jwk] } = await (await ask('/api/station/v1/keys')).json() as { keys: [Record<string, string>] }
  const [head, , tail] = signature.split('.')
  await compactVerify(`${head}.${Buffer.from(canonical(signed)).toString('base64url')}.${tail}`, await importJWK(jwk, 'EdDSA'))

  const csv = await ask(`/api/station/v1/tables/${tableId}`, { accept: 'text/csv' })
  expect(csv.headers.get('content-type')).toContain('text/csv')
  const lines = (await csv.text()).trim().split('\r\n')
  expect(lines).toHaveLength(1 + table.retunes.length)
  // Counted from the end: a quoted text with a comma stands before it.
  const header = lines[0]!.split(',')
  const fromEnd = header.indexOf('frequencyHz') - header.length
  expect(lines.slice(1).map(line => Number(line.split(',').at(fromEnd)))).toEqual(table.retunes.map(retune => retune.frequencyHz))

  const again = await ask(`/api/station/v1/tables/${tableId}`, { 'accept': 'application/json', 'if-none-match': json.headers.get('etag')! })
  expect(again.status).toBe(304)
  await operator.goto(server.url + passPath, { waitUntil: 'networkidle' })
  await eventually(operator, () => operator.getByText('collected', { exact: true }))
})

it('a link made too strict raises one alert; its e-mail arrives, and the page it leads to acknowledges it', async () => {
  await onCall.goto(`${server.url}/fleet`, { waitUntil: 'networkidle' })
  await onCall.getByRole('link', { name: craft }).first().click()
  await onCall.getByRole('link', { name: 'Change UHF command' }).click()
  await onCall.getByLabel('Stated limit').fill('60')
  await onCall.getByRole('button', { name: 'Keep', exact: true }).click()

  await onCall.goto(`${server.url}/alerts`, { waitUntil: 'networkidle' })
  await eventually(onCall, () => onCall.getByRole('link', { name: new RegExp(`^${craft}.*UHF command`) }))
  await onCall.goto(`${server.url}/demo/mail`, { waitUntil: 'networkidle' })
  const mail = await eventually(onCall, () => onCall.getByRole('listitem').filter({ hasText: `${craft}: the residual on UHF command` }).filter({ hasText: 'oncall@tern-bay.example' }))
  await mail.locator('summary').click()
  await mail.getByRole('link', { name: /\/alerts\// }).click()
  await onCall.getByRole('heading', { name: new RegExp(`^${craft}: the residual`) }).waitFor()
  await onCall.getByRole('button', { name: 'I have it' }).click()
  await onCall.getByText('Mira Anand has it').waitFor()

  const settled = async () => (await sql.query<{ n: number }>(`SELECT count(*)::int AS n FROM pgboss.job WHERE name = 'predict' AND state IN ('created', 'retry', 'active')`)).rows[0]!.n === 0
  while (!await settled()) await onCall.waitForTimeout(500)
  const { rows } = await sql.query<{ state: string, mails: number }>(`
    SELECT a.state, (SELECT count(*)::int FROM mails m WHERE m.alert_id = a.id) AS mails FROM alerts a JOIN spacecraft s ON s.id = a.spacecraft_id
    WHERE s.name = $1 AND a.kind = 'residual-ahead'`, [craft])
  expect(rows).toEqual([{ state: 'acknowledged', mails: 1 }])
})

it('neither the browser’s console nor the server’s log holds a warning', () => {
  expect(watched.flatMap(({ problems }) => problems)).toEqual([])
  // The log's own lines carry their level; what anything else prints is judged by its words.
  const loud = server.log().split('\n').filter(line => line.startsWith('{') ? !/^\{"level":[123]0,/.test(line) : /\bwarn(ing)?\b|\berror\b|deprecat/i.test(line))
  expect(loud).toEqual([])
})

/** RFC 8785 for what tables hold: keys in the order of their UTF-16 units, numbers as ECMAScript writes them. */
function canonical(value: unknown): string {
  if (Array.isArray(value)) return `[${value.map(canonical).join(',')}]`
  if (value === null || typeof value !== 'object') return JSON.stringify(value)
  return `{${Object.entries(value).sort(([a], [b]) => a < b ? -1 : 1).map(([name, one]) => `${JSON.stringify(name)}:${canonical(one)}`).join(',')}}`
}

it('the uploaded file is the one that stands in the reference data', () => {
  expect(readFileSync(join(root, 'data/reference/sets.tle'), 'utf8').split('\n').filter(line => line.startsWith('1 '))).toHaveLength(30)
})
