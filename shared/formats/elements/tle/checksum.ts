/** Sum of the digits of columns 1 to 68, each minus sign counting 1, modulo 10. Source: the published TLE format. */
export function tleChecksum(line: string): number {
  let sum = 0
  for (let i = 0; i < 68 && i < line.length; i++) {
    const code = line.charCodeAt(i)
    if (code >= 0x30 && code <= 0x39) sum += code - 0x30
    else if (code === 0x2D) sum += 1
  }
  return sum % 10
}
