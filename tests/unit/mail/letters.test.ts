import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { pageAddress, sender } from '../../../server/mail/addresses'
import type { AlertLetterData } from '../../../server/mail/alert-letter'
import { alertLetter } from '../../../server/mail/alert-letter'
import { digestLetter } from '../../../server/mail/digest-letter'
import { invitationLetter } from '../../../server/mail/invitation-letter'

const now = new Date('2026-12-01T17:00:00.000Z')
const alert: AlertLetterData = {
  id: '7a7b2c1e-0000-4000-8000-000000000001', severity: 'call', title: 'Residual beyond what Beacon bears', detail: 'Worst 1 204 Hz, allowance 980 Hz.',
  action: 'Look at the link’s limits.', spacecraftName: 'Gannet', stationName: null, dueAt: new Date('2026-12-01T18:30:00.000Z'), count: 40, now, organisation: 'Tern Bay',
}
const tags = /<[a-z]+[^>]*>/g

describe('mails', () => {
  beforeEach(() => vi.stubEnv('PUBLIC_URL', 'https://nullbeat.example/'))
  afterEach(() => vi.unstubAllEnvs())

  it('say what, when, how bad and what to do, in UTC, in the text and in the HTML alike', () => {
    const letter = alertLetter(alert)
    expect(letter.subject).toBe('ALERT: Residual beyond what Beacon bears')
    for (const part of [letter.text, letter.html]) {
      for (const words of ['Gannet', 'Worst 1 204 Hz, allowance 980 Hz.', '2026-12-01 18:30:00 UTC (in 90 min)', 'What to do: Look at the link’s limits.', '40', 'https://nullbeat.example/alerts/7a7b2c1e-0000-4000-8000-000000000001']) expect(part).toContain(words)
    }
  })

  it('let no text become markup, in any field', () => {
    const hostile = '<img src=x onerror=alert(1)>"\'&'
    const letters = [
      alertLetter({ ...alert, title: hostile, detail: hostile, action: hostile, spacecraftName: hostile, stationName: hostile, organisation: hostile }),
      invitationLetter({ organisation: hostile, name: hostile, invitedBy: hostile, roles: [hostile], address: 'https://nullbeat.example/welcome#x', expiresAt: now }),
      digestLetter({ organisation: hostile, zone: 'UTC', from: now, to: now, now, verdicts: { holds: 1, tight: 0, breaks: 0 }, standingAlerts: [hostile], passes: [{ aos: now, los: now, spacecraftName: hostile, stationName: hostile, tables: 1 }], decisions: [{ aos: now, spacecraftName: hostile, stationName: hostile, linkName: hostile, state: 'drafted', verdict: 'holds', worstResidualHz: 1, allowanceHz: 2 }] }),
    ]
    for (const { html } of letters) {
      expect(html).not.toContain('<img')
      expect(html.match(tags)!.filter(tag => /\son\w+=/i.test(tag))).toEqual([])
      expect(html).toContain('&lt;img src=x onerror=alert(1)&gt;&quot;&#39;&amp;')
    }
  })

  it('fetch nothing when they are read', () => {
    expect(alertLetter(alert).html).not.toMatch(/src=|url\(|<link|<script|@import/)
  })

  it('keep line breaks out of the subject, which would begin a header', () => {
    expect(alertLetter({ ...alert, title: 'A\r\nBcc: b@ops.example' }).subject).toBe('ALERT: A Bcc: b@ops.example')
  })

  it('list the night’s passes and decisions with local time beside UTC, and shorten what is long', () => {
    const aos = new Date('2026-12-01T18:30:05.000Z')
    const pass = { aos, los: new Date('2026-12-01T18:40:00.000Z'), spacecraftName: 'Gannet', stationName: 'North Cove', tables: 2 }
    const { text, subject } = digestLetter({
      organisation: 'Tern Bay', zone: 'Europe/Oslo', from: new Date('2026-12-01T17:00:00.000Z'), to: new Date('2026-12-02T05:00:00.000Z'), now, verdicts: { holds: 70, tight: 2, breaks: 1 }, standingAlerts: [],
      passes: Array.from({ length: 73 }, () => pass),
      decisions: [{ aos, spacecraftName: 'Gannet', stationName: 'North Cove', linkName: 'Beacon', state: 'drafted', verdict: 'breaks', worstResidualHz: 1204, allowanceHz: 980 }],
    })
    expect(subject).toBe('Tonight: 73 passes, 1 decision due')
    expect(text).toContain('73: 70 hold, 2 tight, 1 break')
    expect(text).toContain('2026-12-01 18:00 (UTC+01:00) to 2026-12-02 06:00 (UTC+01:00), Europe/Oslo')
    expect(text).toContain('- 2026-12-01 18:30:05 UTC to 18:40:00 UTC Gannet at North Cove, 2 tables')
    expect(text).toContain('and 13 more on the page')
    expect(text).toMatch(/Beacon: drafted, breaks, residual 1\u202F204 Hz of 980 Hz/)
  })

  it('come from MAIL_FROM, with or without a name', () => {
    expect(sender('Night desk <ops@tern-bay.example>')).toEqual({ name: 'Night desk', address: 'ops@tern-bay.example' })
    expect(sender('"Desk, night" <ops@tern-bay.example>')).toEqual({ name: 'Desk, night', address: 'ops@tern-bay.example' })
    expect(sender('ops@tern-bay.example')).toEqual({ name: 'Nullbeat', address: 'ops@tern-bay.example' })
    expect(pageAddress('/alerts/1')).toBe('https://nullbeat.example/alerts/1')
  })
})
