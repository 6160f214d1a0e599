import { spawn } from 'node:child_process'
import { existsSync, mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { clearLeftOver, livingPostmaster } from '../../../server/cli/lib/cluster.mjs'
import { releaseLock, takeLock } from '../../../server/cli/lib/lock.mjs'
import { commandLineOf, isRunning, stopChild } from '../../../server/cli/lib/processes.mjs'

let folder: string
const strangers: ReturnType<typeof spawn>[] = []
beforeEach(() => { folder = mkdtempSync(join(tmpdir(), 'nullbeat-unit-')) })
afterEach(() => {
  for (const child of strangers.splice(0)) child.kill('SIGKILL')
  rmSync(folder, { recursive: true })
})

/** A process that ends when it is asked to, with words of our choice in its command line. */
async function stranger(...words: string[]): Promise<ReturnType<typeof spawn>> {
  const child = spawn(process.execPath, ['-e', 'setInterval(() => {}, 1000); console.log(1)', ...words], { stdio: ['ignore', 'pipe', 'ignore'] })
  strangers.push(child)
  await new Promise(resolve => child.stdout?.once('data', resolve))
  return child
}

async function deadPid(): Promise<number> {
  const child = await stranger()
  await stopChild(child, 'SIGTERM', 5000)
  return child.pid as number
}

describe('a pid file', () => {
  it('of a database that is gone does not keep the next from starting', async () => {
    writeFileSync(join(folder, 'postmaster.pid'), `${await deadPid()}\n${folder}\n`)
    expect(livingPostmaster(folder)).toBeUndefined()
    await clearLeftOver(folder)
    expect(existsSync(join(folder, 'postmaster.pid'))).toBe(false)
  })

  it('whose number now means another program is dropped, and that program left alone', async () => {
    const other = await stranger('editor')
    writeFileSync(join(folder, 'postmaster.pid'), `${other.pid}\n${folder}\n`)
    await clearLeftOver(folder)
    expect(existsSync(join(folder, 'postmaster.pid'))).toBe(false)
    expect(isRunning(other.pid as number, ['editor'])).toBe(true)
  })

  it('of a database that still runs leads to its being stopped first', async () => {
    const old = await stranger('postgres', '-D', folder)
    writeFileSync(join(folder, 'postmaster.pid'), `${old.pid}\n${folder}\n`)
    expect(livingPostmaster(folder)).toBe(old.pid)
    await clearLeftOver(folder)
    expect(commandLineOf(old.pid as number)).toBeUndefined()
  })

  it('that is lost, or names another program, does not hide a database that still runs', async () => {
    const old = await stranger('postgres', '-D', folder, '-c', 'x')
    expect(livingPostmaster(folder)).toBe(old.pid)
    writeFileSync(join(folder, 'postmaster.pid'), `${await deadPid()}\n${folder}\n`)
    await clearLeftOver(folder)
    expect(commandLineOf(old.pid as number)).toBeUndefined()
  })

  it('of a database of another folder is not taken for ours', async () => {
    const other = await stranger('postgres', '-D', '/elsewhere')
    mkdirSync(join(folder, 'data'))
    writeFileSync(join(folder, 'data/postmaster.pid'), `${other.pid}\n/elsewhere\n`)
    expect(livingPostmaster(join(folder, 'data'))).toBeUndefined()
  })
})

describe('a lock', () => {
  it('is refused while its holder lives, naming it, and free after it', async () => {
    const file = join(folder, 'lock')
    const holder = await stranger('server/cli/start.mjs')
    writeFileSync(file, JSON.stringify({ pid: holder.pid, command: 'start.mjs', note: 'http://127.0.0.1:3000' }))
    expect(takeLock(file, { pid: process.pid, command: 'x' })).toEqual({ held: false, by: { pid: holder.pid, command: 'start.mjs', note: 'http://127.0.0.1:3000' } })
    await stopChild(holder, 'SIGKILL', 5000)
    expect(takeLock(file, { pid: process.pid, command: 'x' })).toMatchObject({ held: true, previous: { pid: holder.pid } })
    releaseLock(file)
    expect(existsSync(file)).toBe(false)
  })

  it('is taken over when its holder’s number means another program now', async () => {
    const file = join(folder, 'lock')
    const other = await stranger('editor')
    writeFileSync(file, JSON.stringify({ pid: other.pid, command: 'start.mjs' }))
    expect(takeLock(file, { pid: process.pid, command: 'x' }).held).toBe(true)
  })

  it('that was written only in part counts as nobody’s', () => {
    const file = join(folder, 'lock')
    writeFileSync(file, '{"pid":')
    expect(takeLock(file, { pid: process.pid, command: 'x' })).toEqual({ held: true })
  })
})
