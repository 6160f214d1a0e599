import { formatHz } from '#shared/utils/format'

/** A typed frequency read back, grouped and in MHz or kHz, so that a digit too many is seen; undefined below 1 kHz. */
export function echoHertz(hz: number | null | undefined): string | undefined {
  if (hz === null || hz === undefined || !Number.isFinite(hz) || Math.abs(hz) < 1000) return undefined
  const [unit, size] = Math.abs(hz) >= 1e6 ? ['MHz', 1e6] as const : ['kHz', 1e3] as const
  return `${formatHz(hz, decimalsOf(hz, 3))} Hz, ${formatHz(hz / size, decimalsOf(hz / size, 6))} ${unit}`
}

/** As many decimals as the value has, up to a limit. */
function decimalsOf(value: number, most: number): number {
  return (/\.(\d*?)0*$/.exec(value.toFixed(most))?.[1] ?? '').length
}
