const DAY_US = 86_400_000_000
/** Microseconds in the last decimal of a TLE's day. */
const US_PER_1E8_DAY = 864

/**
 * Epoch columns of a TLE, year in two digits and day of the year with eight decimals: "26334.51234567". The last decimal is
 * 0.864 ms, to which the epoch is rounded.
 * @returns null outside 1957 to 2056, which two digits cannot say
 */
export function tleEpochField(epochUtcUs: number): { text: string, isRounded: boolean } | null {
  const units = Math.round(epochUtcUs / US_PER_1E8_DAY)
  const day = Math.floor(units / 1e8)
  const year = new Date(day * 86_400_000).getUTCFullYear()
  if (year < 1957 || year > 2056) return null
  const dayOfYear = day - Date.UTC(year, 0, 1) * 1000 / DAY_US + 1
  const fraction = String(units - day * 1e8).padStart(8, '0')
  return { text: `${String(year % 100).padStart(2, '0')}${String(dayOfYear).padStart(3, '0')}.${fraction}`, isRounded: units * US_PER_1E8_DAY !== epochUtcUs }
}
