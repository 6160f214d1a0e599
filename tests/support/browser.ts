import type { Browser, BrowserContextOptions, Page } from 'playwright-core'
import { chromium } from 'playwright-core'

export interface WatchedPage {
  page: Page
  /** Console warnings and errors, uncaught errors and content-security-policy violations so far. */
  problems: string[]
}

export interface TestBrowser {
  browser: Browser
  /** A page in a context of its own (no cookies), 1366×768 unless told otherwise. */
  newPage: (options?: BrowserContextOptions) => Promise<WatchedPage>
  close: () => Promise<void>
}

// The background features look up outside hosts, which a closed network refuses many at a time.
const flags = ['--disable-gpu', '--disable-quic', '--no-first-run', '--disable-background-networking', '--disable-component-update', '--disable-sync']

/** Starts a headless Chromium with an empty profile. */
export async function launchBrowser(): Promise<TestBrowser> {
  const browser = await chromium.launch({
    executablePath: process.env.NULLBEAT_CHROMIUM || '/usr/bin/chromium',
    // Its sandbox does not work for root.
    chromiumSandbox: process.getuid?.() !== 0 && process.env.CI === undefined,
    args: flags,
  })
  const newPage = async (options: BrowserContextOptions = {}): Promise<WatchedPage> => {
    const context = await browser.newContext({ viewport: { width: 1366, height: 768 }, locale: 'en-GB', ...options })
    const problems: string[] = []
    await context.exposeBinding('nullbeatReportViolation', (_source, text: string) => problems.push(text))
    await context.addInitScript(() => {
      document.addEventListener('securitypolicyviolation', (event) => {
        const report = (globalThis as unknown as { nullbeatReportViolation: (text: string) => void }).nullbeatReportViolation
        report(`content security policy: ${event.violatedDirective} blocked ${event.blockedURI} at ${event.sourceFile}:${event.lineNumber}`)
      })
    })
    const page = await context.newPage()
    page.on('console', (message) => {
      if (['warning', 'error'].includes(message.type())) problems.push(`console ${message.type()}: ${message.text()} (${message.location().url})`)
    })
    page.on('pageerror', error => problems.push(`uncaught: ${error.stack ?? error.message}`))
    return { page, problems }
  }
  return { browser, newPage, close: () => browser.close() }
}
