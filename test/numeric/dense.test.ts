import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { leastSquaresByQr, leastSquaresWithRestraint, rankOf } from '../../src/numeric/dense.ts';
import { RankError } from '../../src/numeric/rank-revealing.ts';

/** Machine epsilon × a few dozen operations × condition numbers below 1e3. */
const TOLERANCE = 1e-11;

const ring = (n: number) =>
  Array.from({ length: n }, (_, i) => Array.from({ length: n }, (_, j) => (j === i || j === (i + 1) % n ? 1 : 0)));

describe('rank', () => {
  test('an even ring of pair sums lacks one rank, an odd ring lacks none', () => {
    for (const n of [3, 5, 7, 21]) expect(rankOf(ring(n))).toBe(n);
    for (const n of [4, 6, 8, 20]) expect(rankOf(ring(n))).toBe(n - 1);
  });

  test('units of the columns do not matter', () => {
    expect(rankOf(ring(6).map((row) => row.map((entry, j) => entry * 10 ** (4 * j))))).toBe(5);
    expect(rankOf(ring(7).map((row) => row.map((entry, j) => entry * 10 ** (4 * j))))).toBe(7);
  });

  test('wide, tall, empty and zero matrices', () => {
    expect(rankOf([[1, 2, 3]])).toBe(1);
    expect(rankOf([[1], [2], [3]])).toBe(1);
    expect(rankOf([])).toBe(0);
    expect(
      rankOf([
        [0, 0],
        [0, 0],
      ]),
    ).toBe(0);
  });
});

describe('least squares', () => {
  test('a triangle is solved by hand: H1 = (L12 + L13 − L23)/2, variance 3/4, no redundancy', () => {
    const solution = leastSquaresByQr(ring(3), [7, 9, 8]);
    // Rows 12, 23, 31.
    for (const [i, value] of [3, 4, 5].entries()) expect(solution.coefficients[i]).toBeCloseTo(value, 12);
    for (const i of [0, 4, 8]) expect(solution.covarianceFactor[i]).toBeCloseTo(0.75, 12);
    for (const leverage of solution.leverages) expect(leverage).toBeCloseTo(1, 12);
    expect(solution.dof).toBe(0);
  });

  test('a weight of 3 is the same as three equal rows', () => {
    const once = leastSquaresByQr(
      [
        [1, 0],
        [1, 1],
        [1, 2],
      ],
      [1, 2, 4],
      { weights: [1, 3, 1] },
    );
    const thrice = leastSquaresByQr(
      [
        [1, 0],
        [1, 1],
        [1, 1],
        [1, 1],
        [1, 2],
      ],
      [1, 2, 2, 2, 4],
    );
    once.coefficients.forEach((value, i) => {
      expect(value).toBeCloseTo(thrice.coefficients[i]!, 12);
    });
    once.covarianceFactor.forEach((value, i) => {
      expect(value).toBeCloseTo(thrice.covarianceFactor[i]!, 12);
    });
    expect(once.sumOfSquares).toBeCloseTo(thrice.sumOfSquares, 12);
    expect(once.leverages[1]! / 3).toBeCloseTo(thrice.leverages[1]!, 12);
  });

  test('leverages sum to the number of columns, residuals are orthogonal to the weighted design (seeded)', () => {
    const entry = fc.double({ min: -3, max: 3, noNaN: true });
    const system = fc.array(fc.tuple(entry, entry, entry, fc.double({ min: 0.2, max: 5, noNaN: true })), {
      minLength: 5,
      maxLength: 12,
    });
    fc.assert(
      fc.property(system, (drawn) => {
        const rows = drawn.map(([a, b], i) => [1, a + (i % 3) * 5, b + (i % 4) * 5]);
        const weights = drawn.map(([, , , weight]) => weight);
        const { residuals, leverages } = leastSquaresByQr(
          rows,
          drawn.map(([, , c]) => c),
          { weights },
        );
        expect(leverages.reduce((sum, leverage) => sum + leverage, 0)).toBeCloseTo(3, 9);
        for (const j of [0, 1, 2]) {
          const product = rows.reduce((sum, row, i) => sum + row[j]! * weights[i]! * residuals[i]!, 0);
          expect(Math.abs(product)).toBeLessThan(1e-9);
        }
      }),
      { seed: 20261, numRuns: 100 },
    );
  });

  test('what cannot be told apart is refused, with rank and number of columns', () => {
    expect(() => leastSquaresByQr(ring(6), [1, 2, 3, 4, 5, 6])).toThrow(new RankError(5, 6));
    expect(() => leastSquaresByQr([[1, 1]], [1])).toThrow(RankError);
  });

  test('weights that are not above 0 and entries that are not finite are refused', () => {
    expect(() => leastSquaresByQr([[1], [1]], [1, 2], { weights: [1, 0] })).toThrow(RangeError);
    expect(() => leastSquaresByQr([[1], [NaN]], [1, 2])).toThrow(RangeError);
  });
});

describe('least squares under restraint', () => {
  const differences = [
    [1, -1, 0],
    [1, 0, -1],
    [0, 1, -1],
  ];

  test('a restraint that repeats another changes nothing; one that contradicts it is refused', () => {
    const once = leastSquaresWithRestraint(differences, [1, 3, 1], { rows: [[1, 1, 1]], values: [6] });
    const rows = [
      [1, 1, 1],
      [2, 2, 2],
    ];
    const twice = leastSquaresWithRestraint(differences, [1, 3, 1], { rows, values: [6, 12] });
    once.coefficients.forEach((value, i) => {
      expect(Math.abs(value - twice.coefficients[i]!)).toBeLessThan(TOLERANCE);
    });
    expect(once.dof).toBe(1);
    expect(() => leastSquaresWithRestraint(differences, [1, 3, 1], { rows, values: [6, 13] })).toThrow(RangeError);
  });

  test('restraints that fix everything leave every row redundant', () => {
    const rows = [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ];
    const solution = leastSquaresWithRestraint(
      differences,
      [1, 3, 1],
      { rows, values: [3, 2, 1] },
      { weights: [4, 4, 4] },
    );
    expect([...solution.coefficients].map((value) => Math.round(value * 1e9) / 1e9)).toEqual([3, 2, 1]);
    expect([...solution.leverages]).toEqual([0, 0, 0]);
    expect(solution.dof).toBe(3);
    expect(solution.sumOfSquares).toBeCloseTo(4, 9);
  });

  test('rows and restraints that leave something open are refused', () => {
    expect(() => leastSquaresWithRestraint(differences, [1, 3, 1], { rows: [[1, -1, 0]], values: [1] })).toThrow(
      RankError,
    );
  });
});
