import type { PassOut } from '#shared/schemas/tables'

/** The table of a pass that has least margin; null without tables. A broken rule counts as worse than any margin. */
export function worstTable(tables: PassOut['tables']): PassOut['tables'][number] | null {
  const rank = { breaks: 0, tight: 1, holds: 2 }
  return [...tables].sort((a, b) => rank[a.verdict] - rank[b.verdict] || a.margin - b.margin)[0] ?? null
}
