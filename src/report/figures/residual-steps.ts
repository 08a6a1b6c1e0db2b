/** Where the steps of the colour scale begin, in dB, both ways from 0: nothing is drawn below the first. */
export type ResidualSteps = readonly [number, number, number, number];

/**
 * Steps of 1, 2, 5 and 10 times the 1-2-5 number next to what the fit leaves unexplained, so that most of a sound set stays
 * blank and a faulty take does not.
 * @param deviation in dB; NaN where nothing is spare.
 * @param readings that share a cell: the largest of n stands about √(2 ln n) deviations off (Fisher & Tippett 1928, from memory).
 */
export function residualSteps(deviation: number, readings = 1): ResidualSteps {
  const size = deviation * Math.max(1, Math.sqrt(2 * Math.log(readings)));
  const base = size > 0 && Number.isFinite(size) ? oneTwoFive(size) : 1;
  // Decimal fractions of small multiples, free of the last bits of the product.
  return [1, 2, 5, 10].map((factor) => Number((factor * base).toPrecision(6))) as [number, number, number, number];
}

function oneTwoFive(value: number): number {
  const decade = 10 ** Math.floor(Math.log10(value));
  const ratio = value / decade;
  return decade * (ratio < Math.SQRT2 ? 1 : ratio < Math.sqrt(10) ? 2 : ratio < Math.sqrt(50) ? 5 : 10);
}

/** The step of a residual: 0 to 3, or -1 below the first and for none. */
export function stepOf(residual: number, steps: ResidualSteps): number {
  const size = Math.abs(residual);
  let step = -1;
  while (step < steps.length - 1 && size >= steps[step + 1]!) step++;
  return step;
}
