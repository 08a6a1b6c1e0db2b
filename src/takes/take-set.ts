import type { TakeHeader, UnusedRow } from '../readings/readings.ts';

/** One emitter→receiver spectrum, measured in one go. */
export interface Take extends TakeHeader {
  /** `T001` and so on, in the order of first appearance in the input. */
  readonly id: string;
}

/** How the takes came to their common frequencies. */
export type Grid =
  | { readonly kind: 'as measured' }
  | { readonly kind: 'octave bands'; readonly fraction: number }
  | { readonly kind: 'per decade'; readonly points: number };

/**
 * Takes on one frequency grid. Matrices are row-major, a row a take, a column a frequency:
 * entry (t, f) stands at t · frequencies.length + f. NaN means 'not measured' or 'not given'.
 */
export interface TakeSet {
  readonly takes: readonly Take[];
  /** Hertz, ascending. */
  readonly frequencies: Float64Array;
  /** Decibels. */
  readonly levels: Float64Array;
  /** Standard uncertainty of the level in dB, from the input's own column; absent where no reading has one. */
  readonly uncertainty: Float64Array | undefined;
  /** Kept for the uncertainty of spectrum averages; absent where not given. */
  readonly averages: Float64Array | undefined;
  readonly coherence: Float64Array | undefined;
  readonly noise: Float64Array | undefined;
  readonly grid: Grid;
  /** Readings that fell out in gathering (no whole band, no neighbour to interpolate), one entry a take and reason. */
  readonly unused: readonly UnusedRow[];
  readonly notices: readonly string[];
}
