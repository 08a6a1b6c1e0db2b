/**
 * What a set of takes is to be best for, all smaller the better:
 * - `mean`: root mean square uncertainty of the units
 * - `worst`: largest uncertainty of a unit
 * - `differences`: root mean square uncertainty of all differences between units
 * - `checks`: largest of the smallest detectable shifts of takes
 */
export const CRITERIA = ['mean', 'worst', 'differences', 'checks'] as const;
export type Criterion = (typeof CRITERIA)[number];

/** How good a set of takes is. Sets are compared by `open` first, then by `uncheckable`, then by `value`. */
export interface Merit {
  /** Units that are not told apart. */
  readonly open: number;
  /** Chains mounted and taken once only that nothing checks. */
  readonly uncheckable: number;
  /** In dB (of `checks` without the factor of detectability); Infinity where there is none. */
  readonly value: number;
}

/** Values that differ by less than this part are the same set up to names, or rounding. */
const SAME = 1e-7;

export function isBetter(one: Merit, other: Merit): boolean {
  if (one.open !== other.open) return one.open < other.open;
  if (one.uncheckable !== other.uncheckable) return one.uncheckable < other.uncheckable;
  return one.value < other.value * (1 - SAME);
}
