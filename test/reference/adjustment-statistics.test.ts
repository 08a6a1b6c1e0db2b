/** Published checks of adjustment statistics; the source stands with each test. */
import { describe, expect, test } from 'vitest';
import { chiSquareLower, chiSquareQuantile, chiSquareUpper } from '../../src/numeric/chi-square.ts';
import { leastSquaresByQr } from '../../src/numeric/dense.ts';
import { detectability } from '../../src/numeric/detectability.ts';
import { noncentralChiSquareUpper } from '../../src/numeric/noncentral-chi-square.ts';
import { normalUpperQuantile } from '../../src/numeric/normal.ts';

function expectClose(value: number, expected: number, relative: number): void {
  expect(Math.abs(value / expected - 1), `${value} for ${expected}`).toBeLessThan(relative);
}

/**
 * Source: C. Ghilani & P. Wolf, Adjustment Computations, 4th ed. (2006), example 12.1; F. Krumm, Geodetic Network
 * Adjustment Examples (Univ. Stuttgart 2020), pp. 8–9; digits beyond the printed ones recomputed. The book's S0 of 0.6575
 * is not the root of its own v'Pv/3; Krumm's 0.6512 is.
 */
test('a weighted levelling network', () => {
  const relative = 1e-6;
  const fixed = 437.596;
  const lines = [
    [0, 1, 10.509, 0.006],
    [1, 2, 5.36, 0.004],
    [2, 3, -8.523, 0.005],
    [3, 0, -7.348, 0.003],
    [1, 3, -3.167, 0.004],
    [0, 2, 15.881, 0.012],
  ] as const;
  const rows = lines.map(([from, to]) => [1, 2, 3].map((point) => (to === point ? 1 : 0) - (from === point ? 1 : 0)));
  const y = lines.map(([from, to, height]) => height + (from === 0 ? fixed : 0) - (to === 0 ? fixed : 0));
  const weights = lines.map(([, , , sigma]) => 1 / sigma ** 2);
  const { coefficients, covarianceFactor, residuals, leverages, sumOfSquares, dof } = leastSquaresByQr(rows, y, {
    weights,
  });

  [448.10871173, 453.46846778, 444.94360533].forEach((height, i) => {
    expect(Math.abs(coefficients[i]! - height)).toBeLessThan(1e-6);
  });
  // Adjusted minus observed, in mm.
  [3.711729, -0.243945, -1.862452, 0.394669, 1.893603, -8.532217].forEach((v, i) => {
    expect(Math.abs(-1000 * residuals[i]! - v)).toBeLessThan(1e-6);
  });
  [0.65486935, 0.32944845, 0.5091747, 0.18770491, 0.43262081, 0.88618178].forEach((redundancy, i) => {
    expectClose(1 - leverages[i]!, redundancy, relative);
  });
  expect(dof).toBe(3);
  expectClose(sumOfSquares, 1.27212283, relative);
  const scale = Math.sqrt(sumOfSquares / dof);
  expectClose(scale, 0.65118426, relative);
  [3.524869, 4.048435, 2.703822].forEach((deviation, i) => {
    expectClose(1000 * Math.sqrt(covarianceFactor[4 * i]!), deviation, relative);
  });
  [2.295339, 2.636276, 1.760687].forEach((deviation, i) => {
    expectClose(1000 * scale * Math.sqrt(covarianceFactor[4 * i]!), deviation, relative);
  });
  // Given with five digits.
  expect(Math.abs(chiSquareUpper(sumOfSquares, 3) - 0.73576)).toBeLessThan(5e-6);
  expectClose(chiSquareQuantile(0.025, 3), 0.21579528, relative);
  expectClose(chiSquareQuantile(0.975, 3), 9.3484036, relative);
});

/** Source: W. Baarda 1968, A testing procedure for use in geodetic networks (17.07 and 4.13; recalled, recomputed). */
describe('detectability factor', () => {
  const table = [
    [0.05, 0.8, 2.801585, 7.84888],
    [0.01, 0.8, 3.417451, 11.678968],
    [0.001, 0.8, 4.132148, 17.074647],
    [0.001, 0.9, 4.572078, 20.9039],
    [0.05, 0.9, 3.241516, 10.507423],
  ] as const;

  test.each(table)('risk %d, power %d', (risk, power, factor, noncentrality) => {
    expect(Math.abs(detectability(risk, power) - factor)).toBeLessThan(1e-5);
    expect(Math.abs(detectability(risk, power) ** 2 - noncentrality)).toBeLessThan(1e-5);
    // The noncentral distribution counts alarms on the wrong side too: up to 1e-6 at a risk of 5 %.
    const limit = normalUpperQuantile(risk / 2) ** 2;
    const exact = noncentralChiSquareUpper(limit, 1, detectability(risk, power) ** 2);
    expect(exact).toBeGreaterThanOrEqual(power - 1e-12);
    expect(exact - power).toBeLessThan(1e-6);
  });

  test('limits of the two-sided normal test', () => {
    [
      [0.05, 1.959964],
      [0.01, 2.575829],
      [0.001, 3.290527],
    ].forEach(([risk, limit]) => {
      expect(Math.abs(normalUpperQuantile(risk! / 2) - limit!)).toBeLessThan(1e-6);
      expect(1 - chiSquareLower(limit! ** 2, 1)).toBeCloseTo(risk!, 6);
    });
  });
});

/**
 * Source: D. Hoaglin & R. Welsch 1978, Amer. Statist. 32, 17–22 (ten wood beams of Draper & Stoneman 1966). Data and the
 * printed diagonal (three digits) recalled from memory; further digits recomputed.
 */
test('leverages and studentised residuals of ten wood beams', () => {
  const relative = 1e-7;
  const gravity = [0.499, 0.558, 0.604, 0.441, 0.55, 0.528, 0.418, 0.48, 0.406, 0.467];
  const moisture = [11.1, 8.9, 8.8, 8.9, 8.8, 9.9, 10.7, 10.5, 10.5, 10.7];
  const strength = [11.14, 12.74, 13.13, 11.51, 12.38, 12.6, 11.13, 11.7, 11.02, 11.41];
  const rows = gravity.map((value, i) => [1, value, moisture[i]!]);
  const { coefficients, residuals, leverages, sumOfSquares, dof } = leastSquaresByQr(rows, strength);
  const s = Math.sqrt(sumOfSquares / dof);
  [10.30152378, 8.49471075, -0.26632136].forEach((value, j) => {
    expectClose(coefficients[j]!, value, relative);
  });
  expect(dof).toBe(7);
  expectClose(s, 0.2754403951, relative);
  const hat = [
    0.41789352, 0.24186663, 0.41728055, 0.60439045, 0.25218244, 0.14786879, 0.26163849, 0.1540321, 0.31551061,
    0.18733641,
  ];
  const internal = [
    -2.11381331, 0.28640388, 0.19641804, -0.96644039, -1.04952172, 1.76924218, 0.53796494, 0.46336607, 0.28961404,
    -0.03590407,
  ];
  const external = [
    -3.25407928, 0.26672584, 0.18235097, -0.96116898, -1.05851279, 2.20302617, 0.50868523, 0.43572812, 0.26975149,
    -0.03324377,
  ];
  leverages.forEach((leverage, i) => {
    // Eight decimals are given: half of the last one is the tolerance where it is more than 1e-7 relative.
    expect(Math.abs(leverage - hat[i]!)).toBeLessThan(1e-8);
    const studentised = residuals[i]! / (s * Math.sqrt(1 - leverage));
    expect(Math.abs(studentised - internal[i]!)).toBeLessThan(1e-7);
    const deleted = studentised * Math.sqrt((dof - 1) / (dof - studentised ** 2));
    expect(Math.abs(deleted - external[i]!)).toBeLessThan(1e-7);
  });
});
