import type { TableBrief } from '#shared/schemas/tables'

export interface SheetPass extends Pick<TableBrief, 'passId' | 'aos' | 'los' | 'maxElevationDeg' | 'spacecraftName' | 'stationName'> { tables: TableBrief[] }

/** Passes by AOS, each with its tables: uplinks first, then by name. */
export function passesOf(tables: readonly TableBrief[]): SheetPass[] {
  const passes = new Map<string, SheetPass>()
  for (const table of tables) {
    const { passId, aos, los, maxElevationDeg, spacecraftName, stationName } = table
    const pass = passes.get(passId) ?? { passId, aos, los, maxElevationDeg, spacecraftName, stationName, tables: [] }
    pass.tables.push(table)
    passes.set(passId, pass)
  }
  for (const { tables } of passes.values()) tables.sort((a, b) => b.direction.localeCompare(a.direction) || a.linkName.localeCompare(b.linkName))
  return [...passes.values()].sort((a, b) => Date.parse(a.aos) - Date.parse(b.aos) || a.passId.localeCompare(b.passId))
}

/** What the station has of a table, or will get, in few words. */
export function stationHas({ state, revision, digest, out, publishesAt }: Pick<TableBrief, 'state' | 'revision' | 'digest' | 'out' | 'publishesAt'>): string {
  const has = out ?? (state === 'published' || state === 'collected' ? { revision, digest: digest!, state } : null)
  if (has) return `r${has.revision} ${has.digest.slice(0, 12)}, ${has.state === 'collected' ? 'collected' : 'not collected'}`
  if (state === 'withdrawn') return 'withdrawn: not to be used'
  if (state === 'lapsed') return 'nothing: lapsed'
  return publishesAt ? `nothing; slot ${publishesAt.slice(11, 16)}` : 'nothing'
}
