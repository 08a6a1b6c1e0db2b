import type { TakeHeader, UnusedRow } from '../readings/readings.ts';
import type { UncertaintyOrigin } from './averaged-readings.ts';

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
  /** Standard uncertainty of the level in dB that the input tells of a reading; absent where it tells none. */
  readonly uncertainty: Float64Array | undefined;
  /** Where that comes from: the column `u_db`, `averages` (and `coherence`), or both; absent is the column. */
  readonly uncertaintyOrigin?: UncertaintyOrigin | undefined;
  /**
   * By how much taking background noise off the level multiplies its standard uncertainty, 1 or more; already in
   * `uncertainty`. Absent where no noise was taken off.
   */
  readonly noiseFactor?: Float64Array | undefined;
  /** Step in dB between levels as they are written, such as 0.01; absent where no step shows, and on a grid of another kind. */
  readonly resolution?: number | undefined;
  readonly grid: Grid;
  /** Readings that fell out in gathering (no whole band, no neighbour to interpolate), one entry a take and reason. */
  readonly unused: readonly UnusedRow[];
  readonly notices: readonly string[];
}
