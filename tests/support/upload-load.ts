import { readFileSync } from 'node:fs'
import { setTimeout as wait } from 'node:timers/promises'
import type { ManySets } from './many-sets'
import { manySets } from './many-sets'
import { startUploadServer } from './upload-server'

export interface UploadRun {
  bytes: number
  status: number
  acceptedMs: number
  doneMs: number
  accepted: number
  state: string
  /** Of the server's memory, above what it held before. */
  growthMb: number
  /** Of other requests made meanwhile. */
  otherP99Ms: number
  others: number
  /** Different shares of the file that were told while it was read. */
  progress: number
}

const residentMb = (pid: number) => Number(/VmRSS:\s+(\d+) kB/.exec(readFileSync(`/proc/${pid}/status`, 'utf8'))![1]) / 1024
const otherEveryMs = 20

/** Uploads a large file to a built server and tells what it cost, and whom it kept waiting. */
export async function runUpload(sets: ManySets): Promise<UploadRun> {
  const { server, key, post, get, close } = await startUploadServer()
  try {
    const body = manySets(sets)
    for (let i = 0; i < 20; i++) await get('/api/spacecraft')
    const before = residentMb(server.pid)
    let largest = before
    let isOver = false
    const waits: number[] = []
    const others = (async () => {
      while (!isOver) {
        const asked = performance.now()
        await fetch(`${server.url}/api/element-sets/uploads/00000000-0000-4000-8000-000000000000`, { headers: key }).then(response => response.arrayBuffer())
        waits.push(performance.now() - asked)
        largest = Math.max(largest, residentMb(server.pid))
        await wait(otherEveryMs)
      }
    })()
    const begun = performance.now()
    const response = await post(body)
    const acceptedMs = performance.now() - begun
    const { id } = await response.json() as { id: string }
    const told = new Set<number>()
    let report = await get(`/api/element-sets/uploads/${id}`)
    while (report.state === 'reading' || report.state === 'receiving') {
      told.add(report.readBytes)
      await wait(200)
      report = await get(`/api/element-sets/uploads/${id}`)
    }
    const doneMs = performance.now() - begun
    isOver = true
    await others
    waits.sort((a, b) => a - b)
    return {
      bytes: body.length, status: response.status, acceptedMs: Math.round(acceptedMs), doneMs: Math.round(doneMs), accepted: report.accepted, state: report.state,
      growthMb: Math.round(largest - before), otherP99Ms: Math.round(waits[Math.ceil(waits.length * 0.99) - 1]!), others: waits.length, progress: told.size,
    }
  }
  finally {
    await close()
  }
}
