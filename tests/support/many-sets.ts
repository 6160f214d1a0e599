/** Digits count themselves, minus signs one, modulo 10: the checksum as published. */
const withChecksum = (line: string): string => `${line}${[...line].reduce((sum, c) => sum + (c === '-' ? 1 : c >= '0' && c <= '9' ? Number(c) : 0), 0) % 10}`

export interface ManySets {
  count: number
  /** Where the counting begins: two ranges that do not meet have no set in common. */
  from?: number
  /** Length of the name line before each; none when left out. */
  nameLength?: number
}

/** A file of invented sets in two or three lines, each another object or another place on its orbit. */
export function manySets({ count, from = 0, nameLength = 0 }: ManySets): Buffer {
  const lines: string[] = []
  for (let i = from; i < from + count; i++) {
    const number = String(10_000 + i % 80_000)
    const anomaly = ((i % 3_600_000) / 10_000).toFixed(4).padStart(8)
    if (nameLength > 0) lines.push(`0 ${`Invented ${i} `.padEnd(nameLength - 1, 'x')}`)
    lines.push(withChecksum(`1 ${number}U 26801A   26334.51234567  .00008123  00000+0  31234-3 0  101`))
    lines.push(withChecksum(`2 ${number}  97.4021  45.1234 0012345  87.6543 ${anomaly} 15.21987654 4321`))
  }
  return Buffer.from(`${lines.join('\n')}\n`)
}
