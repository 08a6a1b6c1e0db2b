import { effectiveCount } from '../numeric/effective-count.ts';

/** Degrees of freedom below this are rounding. */
export const ROUNDING = 1e-9;

/** Correlation is looked at with at most so many frequencies a band, evenly picked; fewer only cost degrees of freedom. */
const MOST_FREQUENCIES = 40;

/**
 * How many of some neighbouring frequencies count as independent in a mean square (see `effectiveCount`): from 1 to their number.
 * @param parts for each part of the misfit its vectors, one a frequency.
 * @param freedom degrees of freedom at each frequency.
 * Cost: vector length × frequencies² / 2.
 */
export function independentFrequencies(
  parts: readonly (readonly Float64Array[])[],
  freedom: readonly number[],
): number {
  const used = [...freedom.keys()].filter((k) => freedom[k]! > ROUNDING);
  const count = Math.min(MOST_FREQUENCIES, used.length);
  const picked = Array.from({ length: count }, (_, k) => used[Math.floor(((k + 0.5) * used.length) / count)]!);
  const products = new Float64Array(count * count);
  for (let a = 0; a < count; a++) {
    for (let b = a; b < count; b++) {
      const product = parts.reduce((sum, vectors) => sum + dot(vectors[picked[a]!]!, vectors[picked[b]!]!), 0);
      products[a * count + b] = product;
      products[b * count + a] = product;
    }
  }
  return effectiveCount(
    products,
    Float64Array.from(picked, (k) => freedom[k]!),
  );
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k]! * b[k]!;
  return sum;
}
