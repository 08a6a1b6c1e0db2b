import { effectiveCount } from '../numeric/effective-count.ts';

/** Degrees of freedom below this are rounding. */
export const ROUNDING = 1e-9;

/** Correlation is looked at with at most so many frequencies a band, evenly picked; fewer only cost degrees of freedom. */
const MOST_FREQUENCIES = 40;

/** Whether each of `count` frequencies is one of those that stand for all of them. */
export function standingFor(count: number): boolean[] {
  const most = Math.min(MOST_FREQUENCIES, count);
  const picked = new Set(Array.from({ length: most }, (_, k) => Math.floor(((k + 0.5) * count) / most)));
  return Array.from({ length: count }, (_, k) => picked.has(k));
}

/** The misfit of a take or pair at one frequency, in one or several parts that scatter alike, and its degrees of freedom. */
export interface MisfitVectors {
  readonly parts: readonly Float64Array[];
  readonly dof: number;
}

/**
 * How many of some neighbouring frequencies count as independent in a mean square (see `effectiveCount`): from 1 to the
 * number of those with degrees of freedom. Entries of all vectors belong to the same takes or pairs.
 * Cost: vector length × frequencies² / 2.
 */
export function independentFrequencies(vectors: readonly MisfitVectors[]): number {
  const used = vectors.filter(({ dof }) => dof > ROUNDING);
  const count = used.length;
  const products = new Float64Array(count * count);
  for (let a = 0; a < count; a++) {
    for (let b = a; b < count; b++) {
      const product = used[a]!.parts.reduce((sum, part, k) => sum + dot(part, used[b]!.parts[k]!), 0);
      products[a * count + b] = product;
      products[b * count + a] = product;
    }
  }
  return effectiveCount(
    products,
    Float64Array.from(used, ({ dof }) => dof),
  );
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k]! * b[k]!;
  return sum;
}
