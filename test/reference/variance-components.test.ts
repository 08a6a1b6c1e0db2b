/** Published checks of variance components, excess variance, lack of fit and additivity; the source stands with each test. */
import { describe, expect, test } from 'vitest';
import { fQuantile, fUpper } from '../../src/numeric/f-distribution.ts';
import type { SparseRows } from '../../src/numeric/grouped-projection.ts';
import { nestedAnova, splitIntoStrata } from '../../src/numeric/nested-anova.ts';
import { nestedReml } from '../../src/numeric/nested-reml.ts';
import { nestedRows } from '../../src/numeric/nested-rows.ts';
import { reml } from '../../src/numeric/reml.ts';
import { tukeyAdditivity } from '../../src/numeric/tukey-additivity.ts';

function expectClose(value: number, expected: number, relative: number): void {
  expect(Math.abs(value / expected - 1), `${value} for ${expected}`).toBeLessThan(relative);
}

function sparse(rows: readonly (readonly (readonly [column: number, factor: number])[])[]): SparseRows {
  const start = new Int32Array(rows.length + 1);
  rows.forEach((row, r) => {
    start[r + 1] = start[r]! + row.length;
  });
  return {
    start,
    column: Int32Array.from(rows.flatMap((row) => row.map(([column]) => column))),
    factor: Float64Array.from(rows.flatMap((row) => row.map(([, factor]) => factor))),
    columns: Math.max(...rows.flatMap((row) => row.map(([column]) => column))) + 1,
  };
}

const constant = (count: number) => sparse(Array.from({ length: count }, () => [[0, 1]] as const));

function sumsOfSquares(fixed: SparseRows, groups: readonly number[], y: readonly number[]) {
  const of = Int32Array.from(groups);
  const anova = nestedAnova({ fixed, outer: of, inner: of });
  const into = {
    within: new Float64Array(y.length),
    inner: new Float64Array(y.length),
    outer: new Float64Array(y.length),
  };
  splitIntoStrata(anova, Float64Array.from(y), into);
  const square = (part: Float64Array) => part.reduce((sum, value) => sum + value * value, 0);
  return { anova, outer: square(into.outer), within: square(into.within), parts: into };
}

const indicators = (groups: readonly number[]) =>
  groups.map((group) => Array.from({ length: Math.max(...groups) + 1 }, (_, g) => (g === group ? 1 : 0)));

const repeated = (groups: number, size: number) =>
  Array.from({ length: groups * size }, (_, i) => Math.floor(i / size));

/** Source: O. Davies 1947; data set Dyestuff of lme4 (its REML criterion and predictions; recomputed). */
describe('dyestuff, six batches of five', () => {
  const y = [
    [1545, 1440, 1440, 1520, 1580],
    [1540, 1555, 1490, 1560, 1495],
    [1595, 1550, 1605, 1510, 1560],
    [1445, 1440, 1595, 1465, 1545],
    [1595, 1630, 1515, 1635, 1625],
    [1520, 1455, 1450, 1480, 1445],
  ].flat();
  const batches = repeated(6, 5);

  test('nested analysis of variance', () => {
    const { anova, outer, within } = sumsOfSquares(constant(30), batches, y);
    expect(anova.dof).toEqual({ within: 24, inner: 0, outer: 5 });
    expect(anova.balanced).toBe(true);
    expectClose(outer, 56357.5, 1e-9);
    expectClose(within, 58830, 1e-9);
    const f = outer / 5 / (within / 24);
    expectClose(f, 4.59827, 1e-6);
    expectClose(fUpper(f, 5, 24), 0.0043975, 1e-5);
    expectClose((outer / 5 - within / 24) / (anova.outerOfOuter / 5), 1764.05, 1e-9);
  });

  test('restricted maximum likelihood, dense and nested', () => {
    const relative = 1e-6;
    const fit = reml({ fixed: y.map(() => [1]), random: [indicators(batches)], responses: [y] });
    expect(fit.converged).toBe(true);
    expectClose(fit.variances[0]!, 1764.05, relative);
    expectClose(fit.residualVariance, 2451.25, relative);
    expectClose(fit.coefficients[0]![0]!, 1527.5, relative);
    expectClose(Math.sqrt(fit.covariance[0]!), 19.383412, relative);
    expectClose(fit.criterion, 319.654277, 1e-8);
    // Closed form for balanced groups: √(2/24) × within, √(2 (MS²/5 + within²/24)) / 5 with MS = 11271.5.
    expectClose(fit.standardErrors[1]!, Math.sqrt(2 / 24) * 2451.25, relative);
    expectClose(fit.standardErrors[0]!, Math.sqrt(2 * (11271.5 ** 2 / 5 + 2451.25 ** 2 / 24)) / 5, relative);
    [-17.60685, 0.39126, 28.56223, -23.08454, 56.73319, -44.99529].forEach((effect, k) => {
      // Five decimals are given.
      expect(Math.abs(fit.predictions[0]![0]![k]! - effect)).toBeLessThan(1e-5);
    });
    const design = { fixed: constant(30), outer: Int32Array.from(batches), inner: Int32Array.from(batches) };
    const nested = nestedReml([{ rows: nestedRows(design, Int32Array.of(0)), responses: [Float64Array.from(y)] }], {
      outer: 100,
      inner: undefined,
      within: 100,
    });
    expect(nested.converged).toBe(true);
    expectClose(nested.variances.outer, 1764.05, relative);
    expectClose(nested.variances.within, 2451.25, relative);
  });
});

/** Source: O. Davies & P. Goldsmith 1972; data set Penicillin of lme4 (components recomputed, lme4's own agree to 6e-5). */
describe('penicillin, six samples on twenty-four plates', () => {
  const table = [
    '27 27 25 26 25 24 24 26 24 24 26 25 26 26 26 25 25 25 24 26 25 25 24 24',
    '23 23 21 23 22 22 20 22 21 21 23 22 24 23 23 22 21 22 21 23 21 22 21 21',
    '26 26 25 25 26 25 23 26 24 24 26 26 26 26 25 25 24 24 23 26 24 25 24 24',
    '23 23 24 23 22 23 21 24 22 23 24 24 24 23 24 23 23 23 21 24 22 22 22 22',
    '23 23 24 23 23 22 22 24 22 22 24 24 25 23 24 23 23 23 21 24 22 22 24 21',
    '21 21 20 20 20 19 19 21 20 19 21 20 22 20 22 20 20 19 19 21 18 20 19 18',
  ];
  const y = table.flatMap((row) => row.split(' ').map(Number));
  const samples = repeated(6, 24);
  const plates = y.map((_, i) => i % 24);

  test('sums of squares of the additive model', () => {
    const rowsAndColumns = sparse(y.map((_, i) => [[samples[i]!, 1] as const, [6 + plates[i]!, 1] as const]));
    const single = sumsOfSquares(rowsAndColumns, [...y.keys()], y);
    expect(single.anova.dof).toEqual({ within: 0, inner: 0, outer: 115 });
    expectClose(single.outer, 313 / 9, 1e-9);
    expectClose(Math.sqrt(single.outer / 115), 0.5499231, 1e-7);
    // Every cell has the same redundancy.
    expectClose(single.anova.outerOfOuter / 144, 115 / 144, 1e-9);

    const ofSamples = sumsOfSquares(sparse(plates.map((plate) => [[plate, 1] as const])), samples, y);
    expectClose(ofSamples.outer, 449.2222222, 1e-9);
    expectClose(ofSamples.within, 34.7777778, 1e-8);
    expect([ofSamples.anova.dof.outer, ofSamples.anova.dof.within]).toEqual([5, 115]);
    const ofPlates = sumsOfSquares(sparse(samples.map((sample) => [[sample, 1] as const])), plates, y);
    expectClose(ofPlates.outer, 105.8888889, 1e-8);
    expectClose(ofSamples.outer / 5 / (ofSamples.within / 115), 297.08946, 1e-7);
    expectClose(ofPlates.outer / 23 / (ofPlates.within / 115), 15.22364, 1e-6);
  });

  test('crossed components by restricted maximum likelihood', () => {
    const fit = reml({
      fixed: y.map(() => [1]),
      random: [indicators(plates), indicators(samples)],
      responses: [y],
    });
    expect(fit.converged).toBe(true);
    expectClose(fit.variances[0]!, 0.7169082126, 1e-6);
    expectClose(fit.variances[1]!, 3.7309178744, 1e-6);
    expectClose(fit.residualVariance, 0.3024154589, 1e-6);
    expectClose(fit.criterion, 330.860589, 1e-8);
    expect(Math.abs(Math.sqrt(fit.covariance[0]!) - 0.808595)).toBeLessThan(6e-5);
  });
});

/** Source: NIST StRD, SiRstv (certified values). */
test('silicon resistivity, five instruments', () => {
  const y = [
    [196.3052, 196.124, 196.189, 196.2569, 196.3403],
    [196.3042, 196.3825, 196.1669, 196.3257, 196.0422],
    [196.1303, 196.2005, 196.2889, 196.0343, 196.1811],
    [196.2795, 196.1748, 196.1494, 196.1485, 195.9885],
    [196.2119, 196.1051, 196.185, 196.0052, 196.209],
  ].flat();
  const { anova, outer, within } = sumsOfSquares(constant(25), repeated(5, 5), y);
  // Nine digits, as the values share their first three.
  expectClose(outer, 0.0511462616, 1e-9);
  expectClose(within, 0.21663656, 1e-9);
  expectClose(outer / 4 / (within / 20), 1.18046237440255, 1e-9);
  expectClose(Math.sqrt(within / 20), 0.104076068334656, 1e-9);
  expectClose((outer / 4 - within / 20) / (anova.outerOfOuter / 4), 0.00039094748, 1e-7);
});

/** Excess variance over known variances, by restricted maximum likelihood. */
describe('excess variance', () => {
  const own = (count: number) => indicators(Array.from({ length: count }, (_, i) => i));
  const excess = (y: readonly number[], known: readonly number[]) =>
    reml({ fixed: y.map(() => [1]), random: [own(y.length)], responses: [y], knownVariances: known });

  /** Source: W. Viechtbauer 2005, J. Educ. Behav. Stat. 30, 261–293, example 1 (published 0.2232; recomputed). */
  test('ten studies', () => {
    const fit = excess(
      [-0.581, 0.53, 0.771, 1.031, 0.553, 0.295, 0.078, 0.573, -0.176, -0.232],
      [0.023, 0.052, 0.06, 0.115, 0.095, 0.203, 0.2, 0.211, 0.051, 0.04],
    );
    expect(Math.abs(fit.variances[0]! - 0.22322459)).toBeLessThan(5e-7);
    expect(Math.abs(fit.coefficients[0]![0]! - 0.243758)).toBeLessThan(5e-7);
    expect(Math.abs(Math.sqrt(fit.covariance[0]!) - 0.177381)).toBeLessThan(5e-7);
    expect(fit.residualVariance).toBeNaN();
  });

  /** Source: R. DerSimonian & R. Kacker 2007, Contemp. Clin. Trials 28, 105–114, tables 3 and 4 (recomputed). */
  test('six trials', () => {
    const fit = excess(
      [-1.29762872, -1.26487711, 0.12079237, -0.32937739, -0.2006707, -0.12853407],
      [0.34677403, 0.26567574, 0.19838951, 0.02647708, 0.2232968, 0.00649856],
    );
    expect(Math.abs(Math.sqrt(fit.variances[0]!) - 0.184252)).toBeLessThan(1e-5);
    expect(fit.coefficients[0]![0]!).toBeCloseTo(-0.298, 4);
    expect(Math.sqrt(fit.covariance[0]!)).toBeCloseTo(0.1343, 4);
  });

  /** Source: Colditz et al. 1994, J. Amer. Med. Assoc. 271, 698–702; data set dat.bcg (recomputed; widely quoted 0.3132). */
  test('thirteen trials', () => {
    const fit = excess(
      [
        -0.88931133, -1.58538866, -1.34807315, -1.44155119, -0.21754732, -0.78611559, -1.62089822, 0.01195233,
        -0.46941765, -1.3713448, -0.33935883, 0.4459134, -0.01731395,
      ],
      [
        0.32558477, 0.19458112, 0.41536797, 0.02001003, 0.05121017, 0.00690562, 0.22301725, 0.00396158, 0.05643421,
        0.07302479, 0.01241221, 0.53250585, 0.07140466,
      ],
    );
    expect(Math.abs(fit.variances[0]! - 0.31324)).toBeLessThan(2e-5);
    expect(Math.abs(fit.coefficients[0]![0]! + 0.714532)).toBeLessThan(2e-5);
    expect(Math.abs(Math.sqrt(fit.covariance[0]!) - 0.179782)).toBeLessThan(2e-5);
  });
});

/** Source: M. Kutner et al., Applied Linear Statistical Models, 5th ed., section 3.7 (bank data, recalled and reproduced). */
test('lack of fit against pure error', () => {
  const relative = 1e-6;
  const x = [125, 100, 200, 75, 150, 175, 75, 175, 125, 200, 100];
  const y = [160, 112, 124, 28, 152, 156, 42, 124, 150, 104, 136];
  const deposits = [...new Set(x)];
  const line = sparse(x.map((value) => [[0, 1] as const, [1, value] as const]));
  const { anova, outer, within } = sumsOfSquares(
    line,
    x.map((value) => deposits.indexOf(value)),
    y,
  );
  expect(anova.dof).toEqual({ within: 5, inner: 0, outer: 4 });
  expectClose(within, 1148, relative);
  expectClose(outer, 13593.570681, relative);
  expectClose(outer + within, 14741.570681, relative);
  const f = outer / 4 / (within / 5);
  expectClose(f, 14.8013618, relative);
  expectClose(fUpper(f, 4, 5), 0.00559381, relative);
  expectClose(fQuantile(0.99, 4, 5), 11.39193, relative);
});

/** Source: D. Montgomery, Design and Analysis of Experiments, 5th ed., example 5-2 (data recalled, digits recomputed). */
test("Tukey's test of additivity, three temperatures and five pressures", () => {
  const relative = 1e-9;
  const y = [5, 4, 6, 3, 5, 3, 1, 4, 2, 3, 1, 1, 3, 1, 2];
  const rowsAndColumns = sparse(y.map((_, i) => [[Math.floor(i / 5), 1] as const, [3 + (i % 5), 1] as const]));
  const residualsOf = (response: ArrayLike<number>) =>
    sumsOfSquares(rowsAndColumns, [...y.keys()], Array.from(response)).parts.outer;
  const residuals = residualsOf(y);
  const { slope, sumOfSquares, restSumOfSquares, restDof, f, p } = tukeyAdditivity(
    { fitted: y.map((value, i) => value - residuals[i]!), residuals, dof: 8 },
    residualsOf,
  );
  expectClose(slope, 0.0738916256, relative);
  expectClose(sumOfSquares, 0.0985221675, relative);
  expectClose(restSumOfSquares, 1.9014778325, relative);
  expect(restDof).toBe(7);
  expectClose(f, 0.3626943005, relative);
  expectClose(p, 0.5660025886, relative);
});
