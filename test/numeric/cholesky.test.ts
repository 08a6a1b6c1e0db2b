import { describe, expect, it } from 'vitest';
import { choleskyInPlace, choleskyInverse, choleskySolve, symmetricNorm } from '../../src/numeric/cholesky.ts';
import { randomStream } from '../../src/numeric/random.ts';

/** L with small whole numbers and A = L Lᵀ, so that the factor is known exactly. */
const L = [2, 0, 0, 1, 3, 0, -2, 4, 5];
const A = [4, 2, -4, 2, 10, 10, -4, 10, 45];

describe('Cholesky factor', () => {
  it('of a matrix made of whole numbers is exact, and the upper triangle is left alone', () => {
    const a = Float64Array.from(A);
    expect(choleskyInPlace(a, 3)).toBe(true);
    expect([...a]).toEqual([2, 2, -4, 1, 3, 10, -2, 4, 5]);
    expect([a[0], a[3], a[4], a[6], a[7], a[8]]).toEqual([L[0], L[3], L[4], L[6], L[7], L[8]]);
  });

  it('solves and inverts with it', () => {
    const factor = Float64Array.from(A);
    choleskyInPlace(factor, 3);
    // A (1, −2, 3)ᵀ = (−12, 12, 111).
    const b = Float64Array.of(4 - 4 - 12, 2 - 20 + 30, -4 - 20 + 135);
    choleskySolve(factor, 3, b);
    [1, -2, 3].forEach((value, k) => {
      expect(b[k]).toBeCloseTo(value, 13);
    });
    const inverse = new Float64Array(9);
    choleskyInverse(factor, 3, inverse, new Float64Array(9));
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) {
        const entry = [0, 1, 2].reduce((sum, k) => sum + A[3 * i + k]! * inverse[3 * k + j]!, 0);
        expect(entry).toBeCloseTo(i === j ? 1 : 0, 12);
        expect(inverse[3 * i + j]).toBe(inverse[3 * j + i]);
      }
    }
  });

  it.each([
    ['indefinite', [1, 2, 2, 1]],
    ['singular', [1, 1, 1, 1]],
    ['zero', [0, 0, 0, 0]],
    ['not a number', [Number.NaN, 0, 0, 1]],
  ])('says that a matrix is not positive definite: %s', (_, entries) => {
    expect(choleskyInPlace(Float64Array.from(entries), 2)).toBe(false);
  });

  it('of nothing is nothing', () => {
    expect(choleskyInPlace(new Float64Array(0), 0)).toBe(true);
    expect(symmetricNorm(new Float64Array(0), 0)).toBe(0);
  });

  it('inverts random normal matrices to rounding', () => {
    const random = randomStream(1);
    const n = 12;
    for (let run = 0; run < 20; run++) {
      const x = Array.from({ length: 40 * n }, () => random.normal());
      const normal = new Float64Array(n * n);
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) for (let r = 0; r < 40; r++) normal[i * n + j]! += x[r * n + i]! * x[r * n + j]!;
      }
      const factor = Float64Array.from(normal);
      const inverse = new Float64Array(n * n);
      choleskyInPlace(factor, n);
      choleskyInverse(factor, n, inverse, new Float64Array(n * n));
      const condition = symmetricNorm(normal, n) * symmetricNorm(inverse, n);
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) {
          let entry = i === j ? -1 : 0;
          for (let k = 0; k < n; k++) entry += normal[i * n + k]! * inverse[k * n + j]!;
          expect(Math.abs(entry)).toBeLessThan(n * condition * Number.EPSILON);
        }
      }
    }
  });

  it('the norm is the largest column sum of absolute values', () => {
    expect(symmetricNorm(Float64Array.of(1, -5, -5, 2), 2)).toBe(7);
  });
});
