import type { TableOut } from '#shared/schemas/tables'

const done: Record<string, string> = {
  'table.draft': 'drafted', 'table.approve': 'approved', 'table.second': 'approved as second person', 'table.hold': 'held', 'table.release': 'released', 'table.stand-down': 'stood down', 'table.stand-up': 'given the antenna back',
  'table.return-to-draft': 'returned to draft', 'table.publish': 'published', 'table.collect': 'collected', 'table.supersede': 'superseded', 'table.withdraw': 'withdrawn', 'table.lapse': 'lapsed',
}

/** One step of a table's life as it is read: "Revision 2 approved by Ana". */
export function historyWords({ action, by, revision }: Pick<TableOut['history'][number], 'action' | 'by' | 'revision'>): string {
  const what = done[action] ?? action.replace(/^.*\./, '').replaceAll('-', ' ')
  return `${revision === null ? 'Table' : `Revision ${revision}`} ${what} by ${by}`
}
