/**
 * Brings a table over frequency to other frequencies, linearly over log frequency between neighbours.
 * NaN outside the table: nothing is extrapolated.
 * @param frequency hertz, ascending, without repeats.
 */
export function interpolateOverLog(frequency: Float64Array, values: Float64Array, targets: Float64Array): Float64Array {
  const sameFrequency = 1e-9;
  let i = 0;
  return targets.map((target) => {
    while (i + 1 < frequency.length && frequency[i + 1]! <= target * (1 + sameFrequency)) i++;
    const here = frequency[i];
    if (here === undefined) return Number.NaN;
    if (Math.abs(here - target) <= sameFrequency * target) return values[i]!;
    if (here > target || i + 1 >= frequency.length) return Number.NaN;
    const t = Math.log(target / here) / Math.log(frequency[i + 1]! / here);
    return (1 - t) * values[i]! + t * values[i + 1]!;
  });
}
