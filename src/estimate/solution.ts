import type { Pattern } from '../model/separability.ts';
import type { ReadingScatter } from './reading-scatter.ts';
import type { Reaching } from './systematic-shifts.ts';

/** Where the uncertainty of a reading came from. */
export type UncertaintySource = 'column' | 'averages' | 'repeats' | 'given' | 'residuals' | 'scatter' | 'none';

/** Whether every reading has an uncertainty that is known before anything is solved. */
export function isGiven(source: UncertaintySource): boolean {
  return source === 'column' || source === 'averages' || source === 'given';
}

/** Scatter found in one third-octave band, with its degrees of freedom. */
export interface BandScatter {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Standard deviation of one reading in dB; NaN where the band has no degrees of freedom. */
  readonly standardDeviation: number;
  readonly dof: number;
}

/** Standard uncertainty of every reading. Matrices as in TakeSet: entry (t, f) at t · frequencies + f. */
export interface ReadingUncertainty {
  readonly source: UncertaintySource;
  /** One sentence for the reader: what the uncertainty rests on. */
  readonly statement: string;
  /** Decibels; NaN where there is none. */
  readonly values: Float64Array;
  /**
   * What an independent reading of the same weight would have, where readings share a seating or a partner; absent where it
   * is the same as `values`.
   */
  readonly independent?: Float64Array;
  /** Degrees of freedom behind the values at each frequency; Infinity where they count as known, 0 where there is none. */
  readonly dof: Float64Array;
  /** The scatter per band, where the uncertainty was estimated from the readings. */
  readonly bands: readonly BandScatter[];
}

/** The covariance of the links at some frequencies. Where weights differ only by a factor, one matrix serves with a scale. */
export interface CovarianceBlock {
  /** Indices into the frequencies. */
  readonly frequencies: readonly number[];
  /** Variance scale a frequency of this block: covariance = scale · matrix + common, in dB². NaN where there is no uncertainty. */
  readonly scales: Float64Array;
  /** Row-major, linksPerFrequency squared. Rows and columns of open links mean nothing. */
  readonly matrix: Float64Array;
  /** The part that comes from gains shared by all frequencies and from systematic effects, in dB²; absent without them. */
  readonly common: Float64Array | undefined;
  /** The part of `common` that comes from gains alone. */
  readonly ofGains?: Float64Array | undefined;
  /** The systematic effects, with the shift of each link for 1 dB of them. */
  readonly reaching?: readonly Reaching[];
  /** As `matrix`, with the links of shared seatings behind the others; absent where no seating is shared. */
  readonly wide?: Float64Array | undefined;
}

/** The estimate of a gain that is shared by all frequencies. */
export interface GainEstimate {
  /** Index into `Model.links`. */
  readonly link: number;
  /** Decibels. */
  readonly value: number;
  /** NaN where there is none. */
  readonly uncertainty: number;
  /** `datum` where it was set to 0 by convention, since the takes leave it open. */
  readonly status: 'ok' | 'datum';
}

/**
 * The solution of all frequencies. L links of each frequency, F frequencies, T takes.
 * F × L arrays hold entry (f, l) at f · L + l; T × F arrays entry (t, f) at t · F + f. NaN means 'not available'.
 */
export interface Solution {
  readonly patterns: readonly Pattern[];
  /** Pattern of each frequency: index into `patterns`. */
  readonly patternOf: Int32Array;
  /** F × L, decibels. NaN for open links. */
  readonly estimates: Float64Array;
  /** F × L, standard uncertainty in dB; NaN for open links and where readings have no uncertainty. */
  readonly uncertainty: Float64Array;
  /** F × L, effective degrees of freedom of that uncertainty (Infinity where all of it counts as known). */
  readonly dof: Float64Array;
  /**
   * F × L: the same for two other uses, in dB: the unit seated again, and the unit seated again on another partner. NaN
   * where the takes do not tell.
   */
  readonly reseatUncertainty: Float64Array;
  readonly partnerUncertainty: Float64Array;
  /** Their effective degrees of freedom. */
  readonly reseatDof: Float64Array;
  readonly partnerDof: Float64Array;
  /** F × L: 0 ok, 1 datum, 2 open. */
  readonly status: Uint8Array;
  /** T × F, reading − fitted, in dB. NaN where not measured. */
  readonly residuals: Float64Array;
  /** T × F, 1 − leverage, from 0 (nothing checks the reading) to 1. NaN where not measured. */
  readonly redundancy: Float64Array;
  readonly readingUncertainty: ReadingUncertainty;
  readonly covariance: readonly CovarianceBlock[];
  /** The scatter that weighs the readings; absent where they are weighed by what they say of themselves. */
  readonly scatter?: ReadingScatter | undefined;
  readonly gains: readonly GainEstimate[];
  /** Degrees of freedom of the fit at each frequency: Σ redundancy. */
  readonly degreesOfFreedom: Float64Array;
  /** Worst condition number met in a factorisation, and how many blocks needed the rank-revealing fallback. */
  readonly worstCondition: number;
  readonly fallbacks: number;
}

export const LINK_STATUS = ['ok', 'datum', 'open'] as const;
