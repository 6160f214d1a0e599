import { setTimeout as wait } from 'node:timers/promises'
import type { TestServer } from './server'
import { spawnServer } from './server'

interface Given {
  kills: number
  random: () => number
  /** A moment of a server’s life is drawn from its first so many milliseconds. */
  withinMs: number
  options: Parameters<typeof spawnServer>[0]
  /** How many servers there are. */
  servers?: number
  beforeEach?: (index: number) => Promise<void>
  /** While the killed one is gone. */
  afterKill?: () => Promise<void>
}

/** Kills one of some servers after the other at random moments and starts another in its place; ends with all of them ready. */
export async function killServers({ kills, random, withinMs, options, servers = 2, beforeEach, afterKill }: Given): Promise<TestServer[]> {
  const running: TestServer[] = []
  try {
    for (let index = 0; index < servers; index++) running.push(await spawnServer(options))
    for (let index = 0; index < kills; index++) {
      await beforeEach?.(index)
      await wait(random() * withinMs)
      const victim = Math.floor(random() * servers)
      running[victim]!.kill()
      await running[victim]!.ended
      await afterKill?.()
      running[victim] = await spawnServer(options)
    }
    await Promise.all(running.map(server => server.ready()))
    return running
  }
  catch (error) {
    for (const server of running) server.kill()
    throw error
  }
}
