import { readFileSync } from 'node:fs'
import { setTimeout as wait } from 'node:timers/promises'
import { expect } from 'vitest'
import { openDatabase } from '../../server/database/client'
import { spacecraft } from '../../server/database/schema'
import { hashPassword } from '../../server/domain/auth/passwords'
import { password, signIn } from '../api/actors'
import { addPerson } from './fixtures'
import { startOwnCluster } from './own-cluster'
import { startServer } from './server'

interface Call { status: number | null, ms: number }

/** A server on a cluster of its own, an administrator's session, and clients that write and read without pause. */
async function layOut() {
  const cluster = await startOwnCluster()
  const database = openDatabase(cluster.url, { max: 2 })
  const { email } = await addPerson(database.db, ['administrator'], { passwordHash: await hashPassword(password) })
  await database.close()
  const server = await startServer({ databaseUrl: cluster.url, env: { LOG_LEVEL: 'silent' } })
  const session = await signIn(server.url, email)
  const calls: Call[] = []
  const acknowledged: string[] = []
  let isOver = false

  async function call(path: string, body?: object): Promise<number | null> {
    const began = performance.now()
    let status: number | null = null
    try {
      const response = await fetch(`${server.url}${path}`, { method: body ? 'POST' : 'GET', headers: { ...session, ...(body ? { 'content-type': 'application/json' } : {}) }, ...(body ? { body: JSON.stringify(body) } : {}) })
      await response.arrayBuffer()
      status = response.status
    }
    catch { /* no answer: counted as such */ }
    calls.push({ status, ms: performance.now() - began })
    return status
  }
  const writer = async (name: string) => {
    for (let index = 0; !isOver; index++) {
      const given = `${name} ${index}`
      if (await call('/api/spacecraft', { name: given }) === 201) acknowledged.push(given)
      await wait(20)
    }
  }
  const reader = async () => {
    while (!isOver) {
      await call('/api/spacecraft?limit=5')
      await wait(20)
    }
  }
  const load = [writer('A'), writer('B'), reader()]
  return {
    cluster, server, calls, acknowledged,
    rest: async () => {
      isOver = true
      await Promise.all(load)
    },
    remove: async () => {
      isOver = true
      await server.stop()
      await cluster.remove()
    },
  }
}

export interface StopDatabaseFigures { stops: number, acknowledged: number, lost: number, slowestRecoveryS: number, statuses: Record<string, number> }

/** The database is ended hard again and again under load. */
export async function stopDatabaseHard(stops: number): Promise<StopDatabaseFigures> {
  const scene = await layOut()
  try {
    let slowestRecoveryS = 0
    for (let index = 0; index < stops; index++) {
      await wait(700)
      await scene.cluster.killHard()
      await wait(700)
      await scene.cluster.restart()
      const back = performance.now()
      await expect.poll(async () => (await fetch(`${scene.server.url}/api/health/ready`)).status, { timeout: 15_000, interval: 50 }).toBe(200)
      slowestRecoveryS = Math.max(slowestRecoveryS, (performance.now() - back) / 1000)
    }
    await wait(500)
    await scene.rest()
    const { db, close } = openDatabase(scene.cluster.url, { max: 1 })
    const kept = new Set((await db.select({ name: spacecraft.name }).from(spacecraft)).map(({ name }) => name))
    await close()
    const statuses: Record<string, number> = {}
    for (const { status } of scene.calls) statuses[String(status)] = (statuses[String(status)] ?? 0) + 1
    return { stops, acknowledged: scene.acknowledged.length, lost: scene.acknowledged.filter(name => !kept.has(name)).length, slowestRecoveryS: Math.round(slowestRecoveryS * 100) / 100, statuses }
  }
  finally {
    await scene.remove()
  }
}

export interface FreezeFigures { frozenS: number, slowestAnswerS: number, memoryGrowthMb: number, statuses: Record<string, number>, recoveryS: number }

const residentMb = (pid: number) => Number(/VmRSS:\s+(\d+) kB/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))![1]) / 1024

/** All of the database's processes stand still for a while. */
export async function freezeDatabase(frozenS: number): Promise<FreezeFigures> {
  const scene = await layOut()
  try {
    await wait(1500)
    const before = residentMb(scene.server.pid)
    scene.calls.length = 0
    scene.cluster.freeze()
    await wait(frozenS * 1000)
    const memoryGrowthMb = Math.round(residentMb(scene.server.pid) - before)
    scene.cluster.thaw()
    const thawed = performance.now()
    const during = [...scene.calls]
    await expect.poll(async () => (await fetch(`${scene.server.url}/api/health/ready`)).status, { timeout: 15_000, interval: 50 }).toBe(200)
    const recoveryS = Math.round((performance.now() - thawed) / 10) / 100
    await scene.rest()
    const statuses: Record<string, number> = {}
    for (const { status } of scene.calls) statuses[String(status)] = (statuses[String(status)] ?? 0) + 1
    return { frozenS, slowestAnswerS: Math.round(Math.max(...during.map(({ ms }) => ms)) / 10) / 100, memoryGrowthMb, statuses, recoveryS }
  }
  finally {
    await scene.remove()
  }
}
