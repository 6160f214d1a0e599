import { existsSync, mkdtempSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { Readable } from 'node:stream'
import { setTimeout as wait } from 'node:timers/promises'
import { describe, expect, it } from 'vitest'
import { isAtLeast } from '../../../server/cli/lib/require-node.mjs'
import { keepSecrets } from '../../../server/cli/lib/secrets.mjs'
import { ServerLog, needsAttention } from '../../../server/cli/lib/server-log.mjs'
import { countResults } from '../../../server/cli/lib/test-results.mjs'

describe('versions', () => {
  it('compare by number, not by letter', () => {
    expect(isAtLeast('v20.19.0', '20.19')).toBe(true)
    expect(isAtLeast('v20.20.2', '20.19')).toBe(true)
    expect(isAtLeast('v20.9.0', '20.19')).toBe(false)
    expect(isAtLeast('v22.0.0', '20.19')).toBe(true)
  })
})

describe('secrets', () => {
  it('are made once, kept for the owner only, and never made anew over a file that cannot be read', () => {
    const folder = mkdtempSync(join(tmpdir(), 'nullbeat-unit-'))
    try {
      const made = keepSecrets(folder)
      expect(keepSecrets(folder)).toEqual(made)
      expect(statSync(join(folder, 'secrets.json')).mode & 0o777).toBe(0o600)
      expect(made.sessionSecret.length).toBeGreaterThanOrEqual(32)
      expect(made.demoPassword.length).toBeGreaterThanOrEqual(12)
      writeFileSync(join(folder, 'secrets.json'), '{"clust')
      expect(() => keepSecrets(folder)).toThrow(/Restore it/)
    }
    finally {
      rmSync(folder, { recursive: true })
    }
  })
})

describe('the server’s log on the screen', () => {
  it('shows warnings and what is no structured line about an error, and nothing else', () => {
    expect(['{"level":40,"msg":"a"}', '{"level":30,"msg":"error"}', '[error] unhandled', 'Listening on'].map(needsAttention)).toEqual([true, false, true, false])
  })
})

describe('the server’s log in its file', () => {
  it('holds all lines but those with a secret, for the owner only, beside the log before it', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'nullbeat-unit-'))
    const file = join(folder, 'server.log')
    try {
      writeFileSync(file, 'before\n')
      const log = new ServerLog(file)
      const lines = Readable.from(['one\nfirst-administrator http://x/#token=abc\n', 'two\n'])
      log.follow(lines, line => !line.startsWith('first-administrator'))
      while (!existsSync(file) || statSync(file).size < 8) await wait(5)
      expect(readFileSync(file, 'utf8')).toBe('one\ntwo\n')
      expect(log.tail(9)).toBe('one\ntwo')
      expect(statSync(file).mode & 0o777).toBe(0o600)
      expect(readFileSync(`${file}.1`, 'utf8')).toBe('before\n')
    }
    finally {
      rmSync(folder, { recursive: true })
    }
  })
})

describe('the closing count', () => {
  const file = (...statuses: string[]) => ({ status: statuses.includes('failed') ? 'failed' : 'passed', assertionResults: statuses.map(status => ({ status })) })

  it('adds up the tests of all files', () => {
    expect(countResults({ testResults: [file('passed', 'passed'), file('passed', 'failed')] }, 1)).toEqual({ passed: 3, failed: 1 })
  })

  it('counts a file that could not be loaded as a failure', () => {
    expect(countResults({ testResults: [file('passed'), { status: 'failed', assertionResults: [] }] }, 1)).toEqual({ passed: 1, failed: 1 })
  })

  it('is never clean when the runner ended badly, wrote nothing or ran nothing', () => {
    expect(countResults({ testResults: [file('passed')] }, 1).failed).toBe(1)
    expect(countResults(undefined, 137)).toEqual({ passed: 0, failed: 1 })
    expect(countResults({ testResults: [] }, 0).failed).toBe(1)
  })
})
