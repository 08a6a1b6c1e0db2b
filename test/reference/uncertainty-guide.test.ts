/**
 * Worked examples of the Guide to the Expression of Uncertainty in Measurement (JCGM 100:2008) and of EA-4/02 M.
 */
import { describe, expect, test } from 'vitest';
import { leastSquaresByQr } from '../../src/numeric/dense.ts';
import { effectiveDof } from '../../src/numeric/effective-dof.ts';
import { propagate } from '../../src/numeric/propagate.ts';
import { coverageFactor } from '../../src/numeric/student-t.ts';

function expectClose(value: number, expected: number, relative: number): void {
  expect(Math.abs(value / expected - 1), `${value} for ${expected}`).toBeLessThan(relative);
}

describe('JCGM 100:2008, H.2: resistance, reactance and impedance from correlated readings', () => {
  /** The source prints fewer digits (0.071, 0.295, 0.236; r = −0.588, −0.485, 0.993); recomputed from its readings. */
  const relative = 1e-6;
  const readings = [
    [5.007, 4.994, 5.005, 4.99, 4.999],
    [19.663e-3, 19.639e-3, 19.64e-3, 19.685e-3, 19.678e-3],
    [1.0456, 1.0438, 1.0468, 1.0428, 1.0433],
  ];
  const means = readings.map((series) => series.reduce((sum, value) => sum + value, 0) / series.length);
  const covariance = readings.map((a, i) =>
    readings.map((b, j) => a.reduce((sum, value, k) => sum + (value - means[i]!) * (b[k]! - means[j]!), 0) / (5 * 4)),
  );
  const correlation = (matrix: number[][], i: number, j: number) =>
    matrix[i]![j]! / Math.sqrt(matrix[i]![i]! * matrix[j]![j]!);

  test('means, their uncertainties and correlations', () => {
    [4.999, 19.661e-3, 1.04446].forEach((mean, i) => {
      expectClose(means[i]!, mean, relative);
    });
    [0.0032093613, 9.471e-6, 0.00075206383].forEach((u, i) => {
      // The second one is printed with four digits only.
      expectClose(Math.sqrt(covariance[i]![i]!), u, i === 1 ? 5e-5 : relative);
    });
    expectClose(correlation(covariance, 0, 1), -0.3553112, relative);
    expectClose(correlation(covariance, 0, 2), 0.8576242, relative);
    expectClose(correlation(covariance, 1, 2), -0.6451112, relative);
  });

  test('outputs, their uncertainties and correlations', () => {
    const [v, i, phase] = means as [number, number, number];
    const z = v / i;
    const [r, x] = [z * Math.cos(phase), z * Math.sin(phase)];
    const outputs = propagate(
      [
        [r / v, -r / i, -x],
        [x / v, -x / i, r],
        [1 / i, -z / i, 0],
      ],
      covariance,
    );
    expectClose(r, 127.7321699, relative);
    expectClose(x, 219.8465119, relative);
    expectClose(z, 254.2597019, relative);
    [0.0710714, 0.2955817, 0.2363361].forEach((u, k) => {
      expectClose(Math.sqrt(outputs[k]![k]!), u, relative);
    });
    expectClose(correlation(outputs, 0, 1), -0.5884298, relative);
    expectClose(correlation(outputs, 0, 2), -0.4852592, relative);
    expectClose(correlation(outputs, 1, 2), 0.9925116, relative);
  });
});

test('JCGM 100:2008, H.3: a line through thermometer corrections, and its prediction at 30 °C', () => {
  const relative = 1e-8;
  const t = [21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.01, 26.511];
  const b = [-0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.16];
  const { coefficients, covarianceFactor, sumOfSquares, dof } = leastSquaresByQr(
    t.map((at) => [1, at - 20]),
    b,
  );
  expect(dof).toBe(9);
  expectClose(sumOfSquares, 1.10096583109e-4, relative);
  const variance = sumOfSquares / dof;
  const [v00, v01, , v11] = covarianceFactor.map((factor) => factor * variance);
  expectClose(Math.sqrt(variance), 0.00349756396, relative);
  expectClose(coefficients[0]!, -0.17120379013, relative);
  expectClose(coefficients[1]!, 0.00218269774, relative);
  // Ten decimals are given.
  expect(Math.abs(Math.sqrt(v00!) - 0.0028775978)).toBeLessThan(5e-11);
  expect(Math.abs(Math.sqrt(v11!) - 0.0006679388)).toBeLessThan(5e-11);
  expectClose(v01! / Math.sqrt(v00! * v11!), -0.9304296, relative);
  expectClose(coefficients[0]! + 10 * coefficients[1]!, -0.14937681, 4e-8);
  const covariance = [
    [v00!, v01!],
    [v01!, v11!],
  ];
  expectClose(Math.sqrt(propagate([[1, 10]], covariance)[0]![0]!), 0.00413859575, relative);
});

describe('JCGM 100:2008, table G.2: Student factors', () => {
  /** The table's values with three decimals. */
  const printed = 5e-4;
  // 68.27 % and so on stand for the exact shares of one, two and three standard deviations.
  const coverages = [0.6827, 0.9, 0.95, 0.9545, 0.99, 0.9973];
  const table = [
    [1, 1.837, 6.314, 12.706, 13.968, 63.657, 235.784],
    [2, 1.321, 2.92, 4.303, 4.527, 9.925, 19.206],
    [3, 1.197, 2.353, 3.182, 3.307, 5.841, 9.219],
    [4, 1.142, 2.132, 2.776, 2.869, 4.604, 6.62],
    [5, 1.111, 2.015, 2.571, 2.649, 4.032, 5.507],
    [6, 1.091, 1.943, 2.447, 2.517, 3.707, 4.904],
    [7, 1.077, 1.895, 2.365, 2.429, 3.499, 4.53],
    [8, 1.067, 1.86, 2.306, 2.366, 3.355, 4.277],
    [9, 1.059, 1.833, 2.262, 2.32, 3.25, 4.094],
    [10, 1.053, 1.812, 2.228, 2.284, 3.169, 3.957],
    [15, 1.034, 1.753, 2.131, 2.181, 2.947, 3.586],
    [20, 1.026, 1.725, 2.086, 2.133, 2.845, 3.422],
    [25, 1.02, 1.708, 2.06, 2.105, 2.787, 3.33],
    [30, 1.017, 1.697, 2.042, 2.087, 2.75, 3.27],
    [40, 1.013, 1.684, 2.021, 2.064, 2.704, 3.199],
    [50, 1.01, 1.676, 2.009, 2.051, 2.678, 3.157],
    [100, 1.005, 1.66, 1.984, 2.025, 2.626, 3.077],
    [Infinity, 1.0, 1.645, 1.96, 2.0, 2.576, 3.0],
  ];

  test.each(table)('%d degrees of freedom', (dof, ...factors) => {
    factors.forEach((factor, k) => {
      expect(Math.abs(coverageFactor(coverages[k]!, dof) - factor), `${coverages[k]}`).toBeLessThan(printed + 1e-9);
    });
  });
});

test('JCGM 100:2008, G.4.1 example: effective degrees of freedom, neither truncated nor rounded', () => {
  const parts = [
    { u: 0.25, dof: 9 },
    { u: 0.57, dof: 4 },
    { u: 0.82, dof: 14 },
  ];
  const combined = Math.hypot(...parts.map(({ u }) => u));
  const dof = effectiveDof(parts);
  expectClose(combined, 1.029465881, 1e-9);
  // Five decimals given.
  expect(Math.abs(dof - 18.99874)).toBeLessThan(5e-6);
  // Truncated to 18 it would be 2.1009, rounded to 19 it would be 2.0930: ours lies between them, next to the second.
  const k = coverageFactor(0.95, dof);
  expect(k).toBeGreaterThan(coverageFactor(0.95, 19));
  expect(k - coverageFactor(0.95, 19)).toBeLessThan(1e-5);
  expect(coverageFactor(0.95, 18)).toBeCloseTo(2.1009, 4);
  expect(k * combined).toBeCloseTo(2.155, 3);
});

test('EA-4/02 M, example S2: a 10 kg weight', () => {
  /** The source prints 29.3 mg, from a component printed as 8.95 instead of 8.66; recomputed from its budget. */
  const relative = 1e-6;
  const rectangular = (halfWidth: number) => ({ u: halfWidth / Math.sqrt(3), dof: Infinity });
  const repeatability = (deviation: number) => ({ u: deviation / Math.sqrt(3), dof: Infinity });
  const budget = (repeats: { u: number; dof: number }) => [
    { u: 45 / 2, dof: Infinity },
    rectangular(15),
    repeats,
    rectangular(10),
    rectangular(10),
  ];
  const parts = budget(repeatability(25));
  [22.5, 8.660254, 14.433757, 5.773503, 5.773503].forEach((u, k) => {
    expectClose(parts[k]!.u, u, relative);
  });
  const u = Math.sqrt(propagate([[1, 1, 1, 1, 1]], diagonal(parts.map((part) => part.u ** 2)))[0]![0]!);
  expectClose(u, 29.26175, relative);
  expectClose(2 * u, 58.5235, relative);
  expect(effectiveDof(parts)).toBe(Infinity);
  const rounded = budget({ u: 14.2, dof: Infinity });
  expectClose(Math.hypot(...rounded.map((part) => part.u)), 29.147155, relative);
});

function diagonal(entries: readonly number[]): number[][] {
  return entries.map((entry, i) => entries.map((_, j) => (i === j ? entry : 0)));
}
