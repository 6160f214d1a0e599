import type { Settings } from '#shared/schemas/settings'

/** Bounds of the error of UT1 − UTC, s: |UT1 − UTC| is kept below 0.9 s by leap seconds (ITU-R TF.460); a bulletin's value is good to 0.05 s while it is valid. */
const unsetBoundS = 0.9
const setBoundS = 0.05

/** UT1 − UTC and the bound of its error at an instant; past the day until which it is valid it counts as unset. */
export function ut1InForce(settings: Pick<Settings, 'ut1'>, at: Date): { ut1MinusUtcS: number, boundS: number } {
  const { ut1 } = settings
  if (!ut1 || at.getTime() >= Date.parse(ut1.validUntil)) return { ut1MinusUtcS: 0, boundS: unsetBoundS }
  return { ut1MinusUtcS: ut1.ut1MinusUtcS, boundS: setBoundS }
}
