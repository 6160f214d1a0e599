/**
 * Words and units that every part of the core shares. SI and radians inside; the unit ends each name.
 * Instants are `UtcMs`: milliseconds since 1970-01-01T00:00:00Z on UTC without leap seconds, fractions allowed.
 */

export type UtcMs = number
export type Hz = number

declare const frame: unique symbol
/** Cartesian triple in a named frame: TEME, or Earth-fixed (TEME turned about z by GMST; no polar motion). */
export type Vec3<Frame extends 'TEME' | 'ECEF'> = readonly [number, number, number] & { readonly [frame]?: Frame }

/** Closed span of time. */
export interface Span { readonly fromMs: UtcMs, readonly toMs: UtcMs }

/** Mean elements of SGP4 (WGS-72) in TEME, in the units of the published notations, exact numbers. */
export interface MeanElements {
  readonly name: string | null
  /** Text, never a number: up to nine digits; Alpha-5 already spelled out (A0000 is "100000"). */
  readonly catalogueNumber: string | null
  readonly designator: string | null
  /** Whole microseconds since 1970-01-01T00:00:00Z, UTC. */
  readonly epochUtcUs: number
  readonly meanMotionRevPerDay: number
  readonly eccentricity: number
  readonly inclinationDeg: number
  readonly raanDeg: number
  readonly argPericenterDeg: number
  readonly meanAnomalyDeg: number
  /** 1/Earth radii. */
  readonly bstar: number
  /** First derivative of mean motion divided by two, rev/day², as printed. */
  readonly meanMotionDot: number
  /** Second derivative of mean motion divided by six, rev/day³, as printed. */
  readonly meanMotionDdot: number
  readonly classification: string
  readonly elementSetNumber: number | null
  readonly revolutionAtEpoch: number | null
}

export type PropagationError =
  | 'eccentricity-out-of-range' // SGP4 error 1
  | 'mean-motion-not-positive' // 2
  | 'perturbed-eccentricity-out-of-range' // 3
  | 'semi-latus-rectum-negative' // 4
  | 'sub-orbital-epoch' // 5
  | 'decayed' // 6

export interface StateTeme { readonly positionM: Vec3<'TEME'>, readonly velocityMps: Vec3<'TEME'> }
export type Propagation = ({ readonly ok: true } & StateTeme) | { readonly ok: false, readonly error: PropagationError }

/** The one door to the propagator. */
export interface Propagator {
  readonly elements: MeanElements
  at(utcMs: UtcMs): Propagation
  /** For comparison with published runs, which count minutes from the epoch. */
  atMinutes(minutesSinceEpoch: number): Propagation
}
export type PropagatorResult = { readonly ok: true, readonly propagator: Propagator } | { readonly ok: false, readonly error: PropagationError }

/** State by interpolation on a grid; null outside [fromMs, toMs]. Validity ends at the first propagation error. */
export interface Ephemeris {
  readonly fromMs: UtcMs
  readonly toMs: UtcMs
  readonly endedBy: PropagationError | null
  /** True propagation, for refinement. */
  readonly propagator: Propagator
  stateAt(utcMs: UtcMs): StateTeme | null
}

export interface MaskPoint { readonly azimuthRad: number, readonly elevationRad: number }

/** WGS-84 geodetic; height above the ellipsoid of the antenna's phase centre. */
export interface Site {
  readonly latitudeRad: number
  readonly longitudeRad: number
  readonly heightM: number
  readonly minElevationRad: number
  /** Horizon by azimuth, linear between points, across north; empty for none. */
  readonly mask: readonly MaskPoint[]
}

/** Azimuth from true north clockwise, geometric elevation, range rate positive when receding. */
export interface Look {
  readonly azimuthRad: number
  readonly elevationRad: number
  readonly rangeM: number
  readonly rangeRateMps: number
}

export interface PredictedPass {
  readonly aosMs: UtcMs
  readonly culminationMs: UtcMs
  readonly losMs: UtcMs
  readonly maxElevationRad: number
  /** The window's edge cuts the pass there. */
  readonly aosClipped: boolean
  readonly losClipped: boolean
  /** Spans above the station's horizon (minimum elevation and mask); links may narrow them by their own minimum. */
  readonly workable: readonly Span[]
}

export type Direction = 'uplink' | 'downlink'
export type Detector = 'quadrature' | 'coherent' | 'msk' | 'differential' | 'fsk' | 'multicarrier' | 'chirp' | 'stated'

/** A coherent transponder: downlink = numerator/denominator × what it hears. */
export interface Turnaround {
  readonly numerator: number
  readonly denominator: number
  /** The station moves its uplink so that the spacecraft hears it at its nominal frequency. */
  readonly uplinkPrecompensated: boolean
  /** Nominal uplink; null for the one that makes the carrier. */
  readonly uplinkHz: Hz | null
}

/** What the link's physics needs; null means not stated. */
export interface LinkModel {
  readonly direction: Direction
  readonly carrierHz: Hz
  readonly symbolRateHz: number
  readonly detector: Detector
  readonly permittedLossDb: number
  readonly captureRangeHz: Hz | null
  readonly filterBandwidthHz: Hz | null
  readonly rolloff: number | null
  readonly driftLimitHzPerS: number | null
  readonly jumpLimitHz: Hz | null
  /** Allowance of detector `stated`. */
  readonly limitHz: Hz | null
  /** Bit error rate that the link is laid out for; detectors `differential` and `fsk` lose by it. */
  readonly errorRate: number
  /** Es/N0 of a subcarrier, dB, that a `multicarrier` link works at. */
  readonly esN0Db: number
  /** Occupied bandwidth of a `chirp`; of a `multicarrier` where it is stated. */
  readonly bandwidthHz: Hz | null
  /** Of a `chirp`: 2^SF chips a symbol. */
  readonly spreadingFactor: number | null
  /** Licensed band; uplink rows stay inside it. */
  readonly bandLowHz: Hz | null
  readonly bandHighHz: Hz | null
  /** Of downlinks only; without one the spacecraft's own oscillator makes the carrier. */
  readonly turnaround?: Turnaround | null
}

export type LimitedBy = 'loss' | 'captureRange' | 'filter' | 'stated'
export interface Allowance { readonly symbolTimeS: number, readonly epsilon: number, readonly allowanceHz: Hz, readonly limitedBy: LimitedBy }

/** A radio that ramps: slopes are whole multiples of the step, up to the largest, either way. */
export interface RampModel { readonly slopeStepHzPerS: number, readonly maxSlopeHzPerS: number }

/**
 * What stands between the radio's dial and the sky. Sky frequency = oscillator + dial, or, where it inverts the spectrum,
 * oscillator − dial: the oscillator lies above the sky then. A dial's slope changes sign with inversion.
 */
export interface ConverterModel { readonly loHz: Hz, readonly inverts: boolean }

/** A radio: its settings are {offset + k·step} on its own dial, which is sky frequency where there is no converter. */
export interface RadioModel {
  readonly stepHz: Hz
  readonly offsetHz: Hz
  readonly minDwellS: number
  readonly latencyMs: number
  readonly latencyUncertaintyMs: number
  /** Left out or null: it steps only. */
  readonly ramp?: RampModel | null
  readonly converter?: ConverterModel | null
  /** A retune every so many seconds, each at its span's middle; left out or null: as few retunes as serve. */
  readonly cadenceS?: number | null
}

/** Uncertainties; limits add, one-sigma spreads add as root of squares times k. */
export interface BudgetModel {
  readonly clockErrorMs: number
  readonly ut1MinusUtcS: number
  readonly ut1BoundS: number
  /** One sigma of the spacecraft's along-track timing at an instant. */
  readonly alongTrackSigmaS: (utcMs: UtcMs) => number
  readonly spacecraftPpm: number
  readonly stationPpm: number
  readonly k: number
}

/** Everything but `stepsHz` at one instant of the workable part. `oscillatorHz`, `orbitHz` are one sigma; timing and ut1 are limits. */
export interface BudgetParts {
  readonly stepsHz: Hz
  readonly timingHz: Hz
  readonly ut1Hz: Hz
  readonly orbitHz: Hz
  readonly oscillatorHz: Hz
  readonly trimHz: Hz
}

/**
 * A row as published: `atMs` is when to command, whole milliseconds; effective `latencyMs` later. `frequencyHz` is what to set on
 * the radio's dial, and from the instant of effect the dial moves by `slopeHzPerS`.
 */
export interface RetuneRow { readonly atMs: UtcMs, readonly frequencyHz: Hz, readonly slopeHzPerS: number }

export type Verdict = 'holds' | 'tight' | 'breaks'

export interface CheckedRetune extends RetuneRow {
  /** Signed residual (needed minus set) over the row's part of the workable spans, without the budget's uncertainties. */
  readonly residualMinHz: Hz
  readonly residualMaxHz: Hz
  /** Loss at the row's worst residual, dB; null for `chirp` and `stated`. */
  readonly lossDb: number | null
  /** At the instant of effect. */
  readonly dopplerHz: Hz
  readonly rangeRateMps: number
  readonly azimuthRad: number
  readonly elevationRad: number
}

/**
 * The table of the uplink that a coherent spacecraft turns around, at the same station and pass: what its steps leave at the
 * spacecraft comes back on the downlink.
 */
export interface UplinkInUse {
  readonly carrierHz: Hz
  readonly radio: RadioModel
  /** Where the uplink is workable; nothing is sent outside. */
  readonly parts: readonly Span[]
  /** As published, with what each row leaves. */
  readonly retunes: readonly CheckedRetune[]
}

export interface TableCheck {
  readonly verdict: Verdict
  readonly allowance: Allowance
  /** Largest budgeted residual over the workable part, and where. */
  readonly worstResidualHz: Hz
  readonly worstAtMs: UtcMs
  readonly budget: BudgetParts
  /** allowance / worst; Infinity never: capped at 1e6 when the worst is zero. */
  readonly margin: number
  readonly retunes: readonly CheckedRetune[]
  /** Spans of the workable part where the budgeted residual is beyond the allowance. */
  readonly excess: readonly Span[]
  /** Reasons that break whatever the residual: a row outside the band, drift or jump beyond its limit, dwell not kept, off the grid. */
  readonly faults: readonly { readonly code: string, readonly atMs: UtcMs, readonly message: string }[]
  /** Symbol clock scale over the pass, parts per million, smallest and largest. */
  readonly symbolClockPpm: readonly [number, number]
}
