import { execFileSync } from 'node:child_process'
import { readFileSync } from 'node:fs'
import { join } from 'node:path'
import { describe, expect, it } from 'vitest'
import { root } from '../../server/cli/lib/paths.mjs'

/** Folders that hold tracked or new files, down to the second step. */
const files = execFileSync('git', ['ls-files', '--cached', '--others', '--exclude-standard'], { cwd: root, encoding: 'utf8' }).trim().split('\n')
const folders = (top: string) => new Set(files.filter(file => file.startsWith(`${top}/`)).map(file => file.split('/')).filter(parts => parts.length > 2).map(parts => parts[1]!))

const guide = readFileSync(join(root, 'DEVELOPERS.md'), 'utf8')
const map = /## Map\n\n```\n([\s\S]*?)```/.exec(guide)?.[1] ?? ''
const lines = map.trim().split('\n').map((line) => {
  const [, top, rest] = /^(\w+)\/\s+(.*)$/.exec(line) ?? []
  return { top: top!, rooms: [...(rest ?? '').matchAll(/(\w+)\//g)].map(match => match[1]!) }
})

describe('the map in DEVELOPERS.md', () => {
  it('names every folder at the root that is part of the layout, and no other', () => {
    const present = [...new Set(files.filter(file => file.includes('/') && !file.startsWith('.')).map(file => file.split('/')[0]!))]
    expect(lines.map(line => line.top).sort()).toEqual(present.sort())
  })

  it.each(lines.filter(({ top }) => top !== 'drizzle'))('names the rooms of $top/ as they are: mend the map or move the folder', ({ top, rooms }) => {
    expect([...rooms].sort()).toEqual([...folders(top)].sort())
  })
})
