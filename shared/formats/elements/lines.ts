export interface Line {
  /** 1-based. */
  readonly number: number
  readonly text: string
  /** Offsets into the decoded text, without the line's end. */
  readonly start: number
  readonly end: number
}

/** Lines of a text that end in LF, CR LF or CR alone; blank ones are counted but left out. */
export function* contentLines(text: string): Generator<Line> {
  let start = 0
  let number = 1
  while (start <= text.length) {
    let end = start
    let blank = true
    while (end < text.length) {
      const code = text.charCodeAt(end)
      if (code === 0x0A || code === 0x0D) break
      if (code !== 0x20 && code !== 0x09) blank = false
      end++
    }
    if (!blank) yield { number, text: text.slice(start, end), start, end }
    const crLf = text.charCodeAt(end) === 0x0D && text.charCodeAt(end + 1) === 0x0A
    start = end + (crLf ? 2 : 1)
    number++
  }
}
