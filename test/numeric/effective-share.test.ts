import { describe, expect, it } from 'vitest';
import { neighbourCorrelation, shareForMean, shareForVariance } from '../../src/numeric/effective-share.ts';
import { randomStream } from '../../src/numeric/random.ts';

const NONE = Number.NaN;
const of = (rows: number, ...values: number[]) =>
  neighbourCorrelation(Float64Array.from(values), rows, values.length / rows);

describe('correlation of neighbours', () => {
  it('is Σ v(k) v(k+1) over the mean square, by hand', () => {
    // Products 2 + 2; squares (1 + 4)/2 + (4 + 1)/2.
    expect(of(1, 1, 2, 1)).toBeCloseTo(4 / 5, 14);
  });

  it('does not run from one series into the next, nor over a gap', () => {
    expect(of(2, 1, 1, -1, -1)).toBe(0.999);
    expect(of(1, 1, 1, NONE, -5, -5)).toBe(0.999);
    expect(of(1, 1, NONE, 1)).toBe(0);
  });

  it('of alternating, of zero and of too few values is 0', () => {
    expect(of(1, 1, -1, 1, -1)).toBe(0);
    expect(of(1, 0, 0, 0)).toBe(0);
    expect(of(1, 5)).toBe(0);
    expect(neighbourCorrelation(new Float64Array(0), 0, 0)).toBe(0);
  });
});

describe('share of independent values', () => {
  // Source: Bayley & Hammersley 1946, Suppl. J. R. Statist. Soc. 8, 184–197; formulas recalled from memory.
  it('of a long series is (1 − ρ)/(1 + ρ) in a mean and (1 − ρ²)/(1 + ρ²) in a variance', () => {
    expect(shareForMean(0)).toBe(1);
    expect(shareForMean(0.5)).toBeCloseTo(1 / 3, 15);
    expect(shareForVariance(0)).toBe(1);
    expect(shareForVariance(0.5)).toBeCloseTo(3 / 5, 15);
    expect(shareForVariance(0.9, 1e7)).toBeCloseTo(shareForVariance(0.9), 6);
  });

  it('of a short one is the sum over its own pairs, term by term', () => {
    for (const rho of [0, 0.3, 0.9, 0.999]) {
      for (const n of [1, 2, 3, 10, 50]) {
        let sum = 1;
        for (let k = 1; k < n; k++) sum += 2 * (1 - k / n) * rho ** (2 * k);
        // The closed form divides by (1 − ρ²)², which is 4e-6 for the largest correlation.
        expect(Math.abs(shareForVariance(rho, n) * sum - 1)).toBeLessThan(1e-9);
      }
    }
  });

  it('is never below one value in all', () => {
    for (const n of [1, 2, 5, 20]) expect(n * shareForVariance(0.999, n)).toBeGreaterThan(1 - 1e-9);
  });

  it('is the scatter of mean squares of simulated series', () => {
    const random = randomStream(5);
    const [rho, n, runs] = [0.8, 15, 4000];
    const meanSquares = Array.from({ length: runs }, () => {
      let value = random.normal();
      let sum = 0;
      for (let k = 0; k < n; k++) {
        sum += value * value;
        value = rho * value + Math.sqrt(1 - rho * rho) * random.normal();
      }
      return sum / n;
    });
    const variance = meanSquares.reduce((sum, x) => sum + (x - 1) ** 2, 0) / runs;
    // A mean square of m independent normals has variance 2/m. The sampling error of a variance of heavy-tailed values
    // from 4000 runs is about 4 %: three of them.
    expect(Math.abs(2 / variance / (n * shareForVariance(rho, n)) - 1)).toBeLessThan(0.12);
  });
});
