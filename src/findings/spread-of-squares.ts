/** How mean squares of many takes spread: what they have in common, whatever the reason. */
export interface SpreadOfSquares {
  /** Degrees of freedom with which the bulk of them spreads. */
  readonly dof: number;
  /** Factor by which the bulk stands above its expectation; never below 1. */
  readonly excess: number;
}

/** With fewer takes than this their spread says nothing. Common practice, no source. */
const FEWEST_TAKES = 12;

/**
 * Degrees of freedom of mean squares from their own spread. Neighbours along frequency tell only part of how values hang
 * together: what a seating does to a whole spectrum makes all of it move as one. The logarithm of χ²(ν)/ν has the variance
 * ψ′(ν/2), which is 2/ν + 2/ν² to second order, and its median lies at (1 − 2/(9ν))³.
 * Source: Bartlett & Kendall 1946, Suppl. J. R. Statist. Soc. 8, 128–138 (logarithm of a variance); Wilson & Hilferty 1931
 * (median); both recalled from memory. Median and median deviation, so that wild takes do not count.
 * @param expected degrees of freedom from the correlation of neighbours: the result is never above them.
 */
export function spreadOfSquares(squares: readonly number[], expected: number): SpreadOfSquares {
  const logs = squares.filter((square) => square > 0).map(Math.log);
  if (logs.length < FEWEST_TAKES) return { dof: expected, excess: 1 };
  const centre = median(logs);
  const deviation = NORMAL_CONSISTENT * median(logs.map((value) => Math.abs(value - centre)));
  const variance = deviation * deviation;
  const seen = variance > 0 ? (1 + Math.sqrt(1 + 2 * variance)) / variance : expected;
  const dof = Math.min(expected, seen);
  return { dof, excess: Math.max(1, Math.exp(centre) / Math.max(0.1, 1 - 2 / (9 * dof)) ** 3) };
}

/** Makes a median absolute deviation a standard deviation: 1 / Φ⁻¹(3/4). */
const NORMAL_CONSISTENT = 1.482602;

function median(values: readonly number[]): number {
  const sorted = Float64Array.from(values).sort();
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}
