/**
 * Numerical tolerance of a standard uncertainty that is stated to `digits` significant digits: half a unit of the last one.
 * With u = c · 10^l, c a whole number of `digits` digits, it is ½ · 10^l.
 * Source: JCGM 101:2008, 7.9.2.
 */
export function numericalTolerance(uncertainty: number, digits: number): number {
  const [mantissa, exponent] = uncertainty.toExponential(digits - 1).split('e') as [string, string];
  if (!(Number(mantissa) > 0)) throw new RangeError(`no tolerance for an uncertainty of ${uncertainty}`);
  return 0.5 * 10 ** (Number(exponent) - (digits - 1));
}
