/** One independent part of a combined standard uncertainty: its own standard uncertainty and degrees of freedom. */
export interface UncertaintyPart {
  /** In the unit of the result, sensitivity included. */
  readonly u: number;
  /** Above 0; infinite for a part that is known exactly. */
  readonly dof: number;
}

/**
 * Effective degrees of freedom of a combined standard uncertainty (Welch–Satterthwaite). Neither truncated nor rounded:
 * the coverage factor is taken from Student's t at the fractional number itself, which is the interpolation that the
 * source allows as the alternative to truncation. Infinite where every part that counts is known exactly, or where all
 * parts are 0.
 * @throws RangeError for a part with negative u or with dof not above 0.
 * Source: JCGM 100:2008, G.4.1, equation G.2b.
 */
export function effectiveDof(parts: readonly UncertaintyPart[]): number {
  let square = 0;
  for (const { u, dof } of parts) {
    if (!(u >= 0 && dof > 0)) throw new RangeError(`u must be 0 or more and dof above 0, got ${u} and ${dof}`);
    square += u * u;
  }
  if (square === 0) return Infinity;
  let reciprocal = 0;
  for (const { u, dof } of parts) reciprocal += ((u * u) / square) ** 2 / dof;
  return 1 / reciprocal;
}
