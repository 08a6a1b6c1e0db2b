import { describe, expect, test } from 'vitest';
import { fUpperQuantile } from '../../src/numeric/f-distribution.ts';
import { randomStream } from '../../src/numeric/random.ts';
import { differenceInterval, varianceInterval } from '../../src/numeric/variance-interval.ts';

test('the interval of a mean square of 10 degrees of freedom', () => {
  // 10/20.4832 and 10/3.24697: chi-square table, three decimals printed (common table, no source).
  const { low, high } = varianceInterval({ value: 1, dof: 10 }, 0.95);
  expect(low).toBeCloseTo(10 / 20.4832, 5);
  expect(high).toBeCloseTo(10 / 3.24697, 5);
});

describe('interval of a difference of mean squares', () => {
  test('leaves 0 exactly where the F test is significant at half the risk', () => {
    for (const [a, b] of [
      [3, 8],
      [12, 5],
      [2.5, 140],
    ] as const) {
      const limit = fUpperQuantile(0.025, a, b);
      const low = (ratio: number) => differenceInterval({ value: ratio, dof: a }, { value: 1, dof: b }, 0.95).low;
      expect(low(limit * 1.001)).toBeGreaterThan(0);
      expect(low(limit * 0.999)).toBe(0);
    }
  });

  test('a difference of 0 still has an upper end, and the ends hold the estimate', () => {
    const none = differenceInterval({ value: 2, dof: 4 }, { value: 2, dof: 9 }, 0.95);
    expect(none.low).toBe(0);
    expect(none.high).toBeGreaterThan(1);
    const some = differenceInterval({ value: 9, dof: 4 }, { value: 2, dof: 9 }, 0.95);
    expect(some.low).toBeLessThan(7);
    expect(some.high).toBeGreaterThan(7);
  });

  test('with the mean square below known as good as exactly it is that of the one above, less the one below', () => {
    const above = { value: 9, dof: 6 };
    const alone = varianceInterval(above, 0.9);
    const { low, high } = differenceInterval(above, { value: 1e-12, dof: 5 }, 0.9);
    expect(low).toBeCloseTo(alone.low, 9);
    expect(high).toBeCloseTo(alone.high, 9);
  });

  test('covers at its coverage', () => {
    const stream = randomStream(17);
    const chiSquare = (dof: number) =>
      Array.from({ length: dof }, () => stream.normal() ** 2).reduce((a, b) => a + b, 0);
    const trials = 2000;
    // Four sampling errors of a proportion of 0.95; the source reports coverages from 0.94 to 0.98.
    const margin = 4 * Math.sqrt((0.95 * 0.05) / trials);
    for (const [ratio, a, b] of [
      [1.1, 6, 12],
      [3, 4, 30],
      [20, 9, 5],
    ] as const) {
      let covered = 0;
      for (let trial = 0; trial < trials; trial++) {
        const above = { value: (ratio * chiSquare(a)) / a, dof: a };
        const { low, high } = differenceInterval(above, { value: chiSquare(b) / b, dof: b }, 0.95);
        if (low <= ratio - 1 && ratio - 1 <= high) covered++;
      }
      expect(covered / trials, `ratio ${ratio}`).toBeGreaterThan(0.95 - margin);
      expect(covered / trials, `ratio ${ratio}`).toBeLessThan(0.99);
    }
  });
});
