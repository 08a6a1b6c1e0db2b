import type { Result } from '../result.ts';

/** Residuals as a map shows them: a row a take, a column a frequency, several of either together where there are many. */
export interface ResidualCells {
  readonly rows: readonly Span[];
  readonly columns: readonly Span[];
  /** The residual with the largest absolute value in the cell, in dB, row by row; NaN where nothing was measured. */
  readonly residual: Float64Array;
  /** Standard uncertainty of that reading in dB, its take and its frequency as indices. */
  readonly uncertainty: Float64Array;
  readonly take: Int32Array;
  readonly frequency: Int32Array;
}

/** From the first index to the one before `end`. */
export interface Span {
  readonly start: number;
  readonly end: number;
}

/** More rows or columns than these no screen shows apart. */
export const MOST_ROWS = 240;
export const MOST_COLUMNS = 240;

/** Cost: linear in the readings. */
export function residualCells({ set, solution }: Result): ResidualCells {
  const width = set.frequencies.length;
  const rows = spans(set.takes.length, MOST_ROWS);
  const columns = spans(width, MOST_COLUMNS);
  const count = rows.length * columns.length;
  const residual = new Float64Array(count).fill(Number.NaN);
  const uncertainty = new Float64Array(count).fill(Number.NaN);
  const take = new Int32Array(count).fill(-1);
  const frequency = new Int32Array(count).fill(-1);
  const columnOf = new Int32Array(width);
  for (const [c, { start, end }] of columns.entries()) columnOf.fill(c, start, end);
  for (const [r, { start, end }] of rows.entries()) {
    for (let t = start; t < end; t++) {
      for (let f = 0; f < width; f++) {
        const value = solution.residuals[t * width + f]!;
        if (Number.isNaN(value)) continue;
        const cell = r * columns.length + columnOf[f]!;
        if (Math.abs(value) <= Math.abs(residual[cell]!)) continue;
        residual[cell] = value;
        uncertainty[cell] = solution.readingUncertainty.values[t * width + f]!;
        take[cell] = t;
        frequency[cell] = f;
      }
    }
  }
  return { rows, columns, residual, uncertainty, take, frequency };
}

/** `count` things in at most `most` spans of nearly the same length. */
export function spans(count: number, most: number): Span[] {
  const parts = Math.min(count, most);
  const edge = (part: number) => Math.round((part * count) / parts);
  return Array.from({ length: parts }, (_, part) => ({ start: edge(part), end: edge(part + 1) }));
}
