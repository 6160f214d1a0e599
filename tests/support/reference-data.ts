import { readFileSync } from 'node:fs'
import { createPropagator } from '../../shared/physics/orbit/propagator'
import type { MeanElements, Propagator } from '../../shared/physics/types'

interface Place { readonly latitudeDeg: number, readonly longitudeDeg: number, readonly heightM: number }

export interface VerificationCase {
  readonly satnum: string
  readonly note: string
  readonly line1: string
  readonly line2: string
  readonly stale_row: boolean
  readonly expected_error: { readonly tsince_min: number, readonly code: number } | null
  /** Minutes, km, km/s. */
  readonly rows: readonly (readonly [number, number, number, number, number, number, number])[]
}

export interface ReferencePass {
  readonly satellite: string
  readonly station: string
  readonly minElevationDeg: number
  readonly aosS: number
  readonly culminationS: number
  readonly losS: number
  readonly maxElevationDeg: number
  readonly aosClipped: boolean
  readonly losClipped: boolean
  readonly samples?: {
    readonly startS: number
    readonly stepS: number
    readonly azimuthDeg: readonly number[]
    readonly elevationDeg: readonly number[]
    readonly rangeM: readonly number[]
    readonly rangeRateMps: readonly number[]
  }
}

export interface ReferencePasses {
  readonly stations: readonly (Place & { readonly id: string })[]
  readonly satellites: readonly { readonly id: string, readonly line1: string, readonly line2: string, readonly windowStart: string, readonly windowDays: number }[]
  readonly passes: readonly ReferencePass[]
}

export interface ReferenceDoppler {
  readonly carriersHz: readonly number[]
  readonly passes: readonly {
    readonly satellite: string
    readonly line1: string
    readonly line2: string
    readonly station: Place
    readonly windowStart: string
    readonly startS: number
    readonly stepS: number
    readonly rangeRateMps: readonly number[]
    readonly lightTimeDownS: readonly number[]
    readonly receivedMinusCarrierHz: Readonly<Record<string, readonly number[]>>
    readonly transmitMinusCarrierHz: Readonly<Record<string, readonly number[]>>
  }[]
}

const read = (name: string): unknown =>
  JSON.parse(readFileSync(new URL(`../../data/reference/${name}`, import.meta.url), 'utf8'))

export const verificationCases = (): readonly VerificationCase[] => (read('sgp4-verification.json') as { cases: VerificationCase[] }).cases
export const referencePasses = (): ReferencePasses => read('passes.json') as ReferencePasses
export const referenceDoppler = (): ReferenceDoppler => read('doppler.json') as ReferenceDoppler

/** A propagator that the test takes for granted. */
export function propagatorOf(elements: MeanElements): Propagator {
  const result = createPropagator(elements)
  if (!result.ok) throw new Error(`The elements give no propagator: ${result.error}`)
  return result.propagator
}
