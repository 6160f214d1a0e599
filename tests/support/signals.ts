import { readFileSync, readdirSync } from 'node:fs'

/** All processes below one, itself first. */
export function familyOf(pid: number): number[] {
  const parents = new Map<number, number>()
  for (const name of readdirSync('/proc')) {
    if (!/^\d+$/.test(name)) continue
    try {
      // The name in parentheses may hold anything; the parent is the second field behind it.
      parents.set(Number(name), Number(readFileSync(`/proc/${name}/stat`, 'utf8').split(') ').at(-1)!.split(' ')[1]))
    }
    catch { /* it has ended meanwhile */ }
  }
  const below = (one: number): number[] => [one, ...[...parents].filter(([, parent]) => parent === one).flatMap(([child]) => below(child))]
  return below(pid)
}

/** Signals a process and all below it, the parent first, so that it starts no others. */
export function signalFamily(pid: number, signal: NodeJS.Signals): void {
  for (const member of familyOf(pid)) {
    try {
      process.kill(member, signal)
    }
    catch { /* it has ended meanwhile */ }
  }
}
