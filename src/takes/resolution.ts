/** Levels with more decimals than this are computed, not read off: their rounding is of no account. */
const MOST_DECIMALS = 6;
/** What conversion to binary fractions leaves of a decimal, relative to levels of 1 dB. */
const ROUNDING = 1e-9;

/** The step between levels as they are written, 10 to the minus number of decimals, in dB; undefined where none shows. */
export function resolutionOf(levels: Float64Array): number | undefined {
  if (levels.length === 0) return undefined;
  for (let decimals = 0; decimals <= MOST_DECIMALS; decimals++) {
    const steps = 10 ** decimals;
    if (levels.every((level) => Math.abs(Math.round(level * steps) / steps - level) <= ROUNDING)) return 1 / steps;
  }
  return undefined;
}
