import { existsSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { fingerprint, makeUnlessCurrent } from '../../../server/cli/lib/marker.mjs'

let root: string
beforeEach(() => {
  root = mkdtempSync(join(tmpdir(), 'nullbeat-unit-'))
  mkdirSync(join(root, 'app/pages'), { recursive: true })
  writeFileSync(join(root, 'app/pages/a.vue'), 'one')
  writeFileSync(join(root, 'lock.json'), '{}')
})
afterEach(() => rmSync(root, { recursive: true }))

const now = (): string => fingerprint(root, ['app', 'lock.json', 'absent'])

describe('a fingerprint of sources', () => {
  it('changes with content, with a name, with a new file, and with what else the outcome depends on', () => {
    const seen = new Set([now(), fingerprint(root, ['app', 'lock.json', 'absent'], ['v20'])])
    writeFileSync(join(root, 'app/pages/a.vue'), 'two')
    seen.add(now())
    writeFileSync(join(root, 'app/pages/b.vue'), 'two')
    seen.add(now())
    rmSync(join(root, 'app/pages/a.vue'))
    seen.add(now())
    expect(seen.size).toBe(5)
  })

  it('stays the same when a file is only touched, or an editor keeps a hidden one', () => {
    const before = now()
    writeFileSync(join(root, 'app/pages/a.vue'), 'one')
    writeFileSync(join(root, 'app/pages/.a.vue.swp'), 'x')
    expect(now()).toBe(before)
  })

  it('leaves out what it is told does not matter', () => {
    const before = fingerprint(root, ['app'], [], ['app/pages'])
    writeFileSync(join(root, 'app/pages/a.vue'), 'two')
    expect(fingerprint(root, ['app'], [], ['app/pages'])).toBe(before)
    writeFileSync(join(root, 'app/app.vue'), 'x')
    expect(fingerprint(root, ['app'], [], ['app/pages'])).not.toBe(before)
  })
})

describe('a slow step', () => {
  it('runs once for the same sources and again when they change', async () => {
    const marker = join(root, 'marker')
    let runs = 0
    const make = async (): Promise<void> => void (runs += 1)
    expect(await makeUnlessCurrent(marker, now(), make)).toBe(true)
    expect(await makeUnlessCurrent(marker, now(), make)).toBe(false)
    writeFileSync(join(root, 'lock.json'), '{ }')
    expect(await makeUnlessCurrent(marker, now(), make)).toBe(true)
    expect(runs).toBe(2)
  })

  it('that ended half-way is done again, even back at the sources of the last whole one', async () => {
    const marker = join(root, 'marker')
    await makeUnlessCurrent(marker, 'old', async () => {})
    await expect(makeUnlessCurrent(marker, 'new', async () => {
      throw new Error('killed')
    })).rejects.toThrow('killed')
    expect(existsSync(marker)).toBe(false)
    expect(await makeUnlessCurrent(marker, 'old', async () => {})).toBe(true)
  })
})
