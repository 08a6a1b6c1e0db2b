/**
 * Certified linear regressions. Source: NIST Statistical Reference Datasets, Linear Regression (name of the set in each
 * title; Longley from J. W. Longley 1967, J. Am. Statist. Assoc. 62, 819–841).
 * Filip and Wampler5 are left out: with condition numbers of 1e10 and more, plain double precision fails legitimately.
 */
import { describe, expect, test } from 'vitest';
import { type DenseSolution, leastSquaresByQr } from '../../src/numeric/dense.ts';
import { fUpper } from '../../src/numeric/f-distribution.ts';

/** y, x1 to x6 */
const longley = [
  [60323, 83.0, 234289, 2356, 1590, 107608, 1947],
  [61122, 88.5, 259426, 2325, 1456, 108632, 1948],
  [60171, 88.2, 258054, 3682, 1616, 109773, 1949],
  [61187, 89.5, 284599, 3351, 1650, 110929, 1950],
  [63221, 96.2, 328975, 2099, 3099, 112075, 1951],
  [63639, 98.1, 346999, 1932, 3594, 113270, 1952],
  [64989, 99.0, 365385, 1870, 3547, 115094, 1953],
  [63761, 100.0, 363112, 3578, 3350, 116219, 1954],
  [66019, 101.2, 397469, 2904, 3048, 117388, 1955],
  [67857, 104.6, 419180, 2822, 2857, 118734, 1956],
  [68169, 108.4, 442769, 2936, 2798, 120445, 1957],
  [66513, 110.8, 444546, 4681, 2637, 121950, 1958],
  [68655, 112.6, 482704, 3813, 2552, 123366, 1959],
  [69564, 114.2, 502601, 3931, 2514, 125368, 1960],
  [69331, 115.7, 518173, 4806, 2572, 127852, 1961],
  [70551, 116.9, 554894, 4007, 2827, 130081, 1962],
];

const norris = {
  x: [
    0.2, 337.4, 118.2, 884.6, 10.1, 226.5, 666.3, 996.3, 448.6, 777.0, 558.2, 0.4, 0.6, 775.5, 666.9, 338.0, 447.5,
    11.6, 556.0, 228.1, 995.8, 887.6, 120.2, 0.3, 0.3, 556.8, 339.1, 887.2, 999.0, 779.0, 11.1, 118.3, 229.2, 669.1,
    448.9, 0.5,
  ],
  y: [
    0.1, 338.8, 118.1, 888.0, 9.2, 228.1, 668.5, 998.5, 449.1, 778.9, 559.2, 0.3, 0.1, 778.1, 668.8, 339.3, 448.9, 10.8,
    557.7, 228.3, 998.0, 888.8, 119.6, 0.3, 0.6, 557.6, 339.3, 888.0, 998.5, 778.9, 10.2, 117.6, 228.9, 668.4, 449.2,
    0.2,
  ],
};

const wampler1 = [
  1, 6, 63, 364, 1365, 3906, 9331, 19608, 37449, 66430, 111111, 177156, 271453, 402234, 579195, 813616, 1118481,
  1508598, 2000719, 2613660, 3368421,
];
const wampler2 = [
  1.0, 1.11111, 1.24992, 1.42753, 1.65984, 1.96875, 2.38336, 2.94117, 3.68928, 4.68559, 6.0, 7.71561, 9.92992, 12.75603,
  16.32384, 20.78125, 26.29536, 33.05367, 41.26528, 51.16209, 63.0,
];

function expectClose(value: number, certified: number, relative: number): void {
  expect(Math.abs(value / certified - 1), `${value} for ${certified}`).toBeLessThan(relative);
}

const standardDeviations = ({ covarianceFactor, coefficients, sumOfSquares, dof }: DenseSolution): number[] =>
  Array.from(coefficients, (_, j) => Math.sqrt((covarianceFactor[j * coefficients.length + j]! * sumOfSquares) / dof));

const totalSquares = (y: readonly number[]): number => {
  const mean = y.reduce((sum, value) => sum + value, 0) / y.length;
  return y.reduce((sum, value) => sum + (value - mean) ** 2, 0);
};

describe('certified regressions', () => {
  test('Longley', () => {
    /** Condition 4.3e4 with scaled columns; squared in the standard deviations. */
    const relative = 1e-7;
    const y = longley.map((row) => row[0]!);
    const solution = leastSquaresByQr(
      longley.map((row) => [1, ...row.slice(1)]),
      y,
    );
    const certified = [
      [-3482258.63459582, 890420.383607373],
      [15.0618722713733, 84.9149257747669],
      [-0.035819179292591, 0.0334910077722432],
      [-2.02022980381683, 0.488399681651699],
      [-1.03322686717359, 0.214274163161675],
      [-0.0511041056535807, 0.22607320006937],
      [1829.15146461355, 455.478499142212],
    ] as const;
    const deviations = standardDeviations(solution);
    certified.forEach(([value, deviation], j) => {
      expectClose(solution.coefficients[j]!, value, relative);
      expectClose(deviations[j]!, deviation, relative);
    });
    expect(solution.dof).toBe(9);
    expectClose(solution.sumOfSquares, 836424.055505915, relative);
    expectClose(Math.sqrt(solution.sumOfSquares / 9), 304.854073561965, relative);
    const total = totalSquares(y);
    expectClose(1 - solution.sumOfSquares / total, 0.995479004577296, relative);
    const f = (total - solution.sumOfSquares) / 6 / (solution.sumOfSquares / 9);
    expectClose(f, 330.285339234588, relative);
    expect(fUpper(f, 6, 9)).toBeLessThan(1e-8);
  });

  test('Norris', () => {
    const relative = 1e-10;
    const solution = leastSquaresByQr(
      norris.x.map((x) => [1, x]),
      norris.y,
    );
    const [u0, u1] = standardDeviations(solution);
    expectClose(solution.coefficients[0]!, -0.262323073774029, relative);
    expectClose(u0!, 0.232818234301152, relative);
    expectClose(solution.coefficients[1]!, 1.00211681802045, relative);
    expectClose(u1!, 0.000429796848199937, relative);
    expect(solution.dof).toBe(34);
    expectClose(solution.sumOfSquares, 26.6173985294224, relative);
    expectClose(Math.sqrt(solution.sumOfSquares / 34), 0.884796396144373, relative);
    const total = totalSquares(norris.y);
    expectClose(1 - solution.sumOfSquares / total, 0.999993745883712, relative);
    expectClose((total - solution.sumOfSquares) / (solution.sumOfSquares / 34), 5436385.54079785, relative);
  });

  test('NoInt1', () => {
    const relative = 1e-12;
    const y = Array.from({ length: 11 }, (_, i) => 130 + i);
    const solution = leastSquaresByQr(
      y.map((value) => [value - 70]),
      y,
    );
    expectClose(solution.coefficients[0]!, 2.07438016528926, relative);
    expectClose(standardDeviations(solution)[0]!, 0.0165289256198347, relative);
    expect(solution.dof).toBe(10);
    expectClose(solution.sumOfSquares, 127.272727272727, relative);
    expectClose(Math.sqrt(solution.sumOfSquares / 10), 3.56753034006338, relative);
    const aboutZero = y.reduce((sum, value) => sum + value * value, 0);
    expectClose(1 - solution.sumOfSquares / aboutZero, 0.999365492298663, relative);
    expectClose((aboutZero - solution.sumOfSquares) / (solution.sumOfSquares / 10), 15750.25, relative);
  });

  test.each([
    ['Wampler1', wampler1, 1, 1e-6],
    ['Wampler2', wampler2, 0.1, 1e-10],
  ] as const)('%s', (_, y, ratio, largestResidualDeviation) => {
    const rows = y.map((_, x) => [0, 1, 2, 3, 4, 5].map((power) => x ** power));
    const solution = leastSquaresByQr(rows, y);
    solution.coefficients.forEach((value, power) => {
      expectClose(value, ratio ** power, 1e-6);
    });
    expect(solution.dof).toBe(15);
    expect(Math.sqrt(solution.sumOfSquares / 15)).toBeLessThan(largestResidualDeviation);
  });
});
