/**
 * Covariance of functions of correlated inputs, to first order: J V Jᵀ.
 * @param jacobian a row per output, a column per input. @param covariance of the inputs, symmetric.
 * Source: JCGM 100:2008, H.2; JCGM 102:2011, 6.2 (clause recalled from memory).
 */
export function propagate(
  jacobian: readonly (readonly number[])[],
  covariance: readonly (readonly number[])[],
): number[][] {
  const half = jacobian.map((row) => covariance.map((inputs) => innerProduct(row, inputs)));
  return half.map((row) => jacobian.map((other) => innerProduct(row, other)));
}

function innerProduct(a: readonly number[], b: readonly number[]): number {
  return a.reduce((sum, value, i) => sum + value * b[i]!, 0);
}
