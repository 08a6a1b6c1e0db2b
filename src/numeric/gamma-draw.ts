import type { RandomStream } from './random.ts';

/**
 * A gamma variable of unit scale. Source: G. Marsaglia & W. W. Tsang, A simple method for generating gamma variables, ACM
 * Transactions on Mathematical Software 26, 2000, 363–372.
 * @param shape above 0.
 */
export function gammaDraw(stream: RandomStream, shape: number): number {
  if (shape < 1) return gammaDraw(stream, shape + 1) * stream.uniform() ** (1 / shape);
  const d = shape - 1 / 3;
  const c = 1 / Math.sqrt(9 * d);
  for (;;) {
    const x = stream.normal();
    const v = (1 + c * x) ** 3;
    if (v > 0 && Math.log(1 - stream.uniform()) < 0.5 * x * x + d - d * v + d * Math.log(v)) return d * v;
  }
}
