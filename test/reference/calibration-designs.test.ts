/**
 * Published calibration designs. Source: NIST/SEMATECH e-Handbook of Statistical Methods, 2.3.4 (section in each title);
 * last one: J. Rice, Mathematical Statistics and Data Analysis, chapter 14 (answers recomputed).
 */
import { describe, expect, test } from 'vitest';
import { type DenseSolution, leastSquaresByQr, leastSquaresWithRestraint } from '../../src/numeric/dense.ts';

/** The factors are printed with four decimals. */
const PRINTED = 5e-5;
const EXACT = 1e-9;

type Comparison = readonly [plus: number, minus: number];

interface Design {
  readonly comparisons: readonly Comparison[];
  readonly items: number;
  readonly nuisance?: readonly number[];
  readonly restraint: readonly number[];
}

const solve = ({ comparisons, items, nuisance, restraint }: Design, y: readonly number[], value: number) => {
  const rows = comparisons.map(([plus, minus], i) => [
    ...Array.from({ length: items }, (_, j) => (j + 1 === plus ? 1 : j + 1 === minus ? -1 : 0)),
    ...(nuisance ? [nuisance[i]!] : []),
  ]);
  return leastSquaresWithRestraint(rows, y, { rows: [restraint], values: [value] });
};

/** Coefficients per unit of each observation, then per unit of the restraint. */
const solutionRows = (design: Design): number[][] => {
  const n = design.comparisons.length;
  const unit = (k: number) => Array.from({ length: n }, (_, i) => (i === k ? 1 : 0));
  return [
    ...Array.from({ length: n }, (_, k) => [...solve(design, unit(k), 0).coefficients]),
    [...solve(design, unit(-1), 1).coefficients],
  ];
};

const factorOf = ({ covarianceFactor }: DenseSolution, combination: readonly number[]): number => {
  const n = Math.sqrt(covarianceFactor.length);
  const at = (i: number) => combination[i] ?? 0;
  let sum = 0;
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) sum += at(i) * at(j) * covarianceFactor[i * n + j]!;
  return Math.sqrt(Math.max(0, sum));
};

const check = (
  design: Design,
  expected: {
    divisor: number;
    rows: readonly (readonly number[])[];
    dof: number;
    factors: readonly (readonly [readonly number[], number])[];
  },
) => {
  const rows = solutionRows(design);
  expect(rows.length).toBe(expected.rows.length);
  expected.rows.forEach((row, i) => {
    row.forEach((entry, j) => {
      expect(Math.abs(rows[i]![j]! * expected.divisor - entry), `row ${i + 1}, item ${j + 1}`).toBeLessThan(EXACT);
    });
  });
  const solution = solve(
    design,
    design.comparisons.map(() => 0),
    1,
  );
  expect(solution.dof).toBe(expected.dof);
  for (const [combination, factor] of expected.factors) {
    expect(Math.abs(factorOf(solution, combination) - factor), combination.join(' ')).toBeLessThan(PRINTED);
  }
};

const allPairs = (n: number): Comparison[] =>
  Array.from({ length: n }, (_, i) => Array.from({ length: n - i - 1 }, (_, k) => [i + 1, i + k + 2] as const)).flat();

describe('designs with a restraint', () => {
  test('1,1,1 (2.3.4.1.1)', () => {
    check(
      { comparisons: allPairs(3), items: 3, restraint: [1, 0, 0] },
      {
        divisor: 3,
        rows: [
          [0, -2, -1],
          [0, -1, -2],
          [0, 1, -1],
          [3, 3, 3],
        ],
        dof: 1,
        factors: [
          [[1], 0],
          [[0, 1], 0.8165],
          [[0, 0, 1], 0.8165],
          [[0, 1, 1], Math.SQRT2],
        ],
      },
    );
  });

  test('1,1,1,1 (2.3.4.1.2)', () => {
    check(
      { comparisons: allPairs(4), items: 4, restraint: [1, 1, 0, 0] },
      {
        divisor: 8,
        rows: [
          [2, -2, 0, 0],
          [1, -1, -3, -1],
          [1, -1, -1, -3],
          [-1, 1, -3, -1],
          [-1, 1, -1, -3],
          [0, 0, 2, -2],
          [4, 4, 4, 4],
        ],
        dof: 3,
        factors: [
          [[1], 0.3536],
          [[0, 1], 0.3536],
          [[0, 0, 1], 0.6124],
          [[0, 0, 0, 1], 0.6124],
          [[1, -1], Math.SQRT1_2],
        ],
      },
    );
  });

  test('1,1,1,1,1 (2.3.4.1.3)', () => {
    check(
      { comparisons: allPairs(5), items: 5, restraint: [1, 1, 0, 0, 0] },
      {
        divisor: 10,
        rows: [
          [2, -2, 0, 0, 0],
          [1, -1, -3, -1, -1],
          [1, -1, -1, -3, -1],
          [1, -1, -1, -1, -3],
          [-1, 1, -3, -1, -1],
          [-1, 1, -1, -3, -1],
          [-1, 1, -1, -1, -3],
          [0, 0, 2, -2, 0],
          [0, 0, 2, 0, -2],
          [0, 0, 0, 2, -2],
          [5, 5, 5, 5, 5],
        ],
        dof: 6,
        factors: [
          [[1], 0.3162],
          [[0, 1], 0.3162],
          [[0, 0, 1], 0.5477],
          [[0, 0, 0, 1], 0.5477],
          [[0, 0, 0, 0, 1], 0.5477],
          [[0, 0, 1, 1], 0.8944],
          [[0, 0, 1, 1, 1], 1.2247],
          [[1, -1], 0.6325],
        ],
      },
    );
  });

  const drift: Design = {
    comparisons: [
      [1, 2],
      [4, 1],
      [3, 4],
      [2, 3],
      [2, 4],
      [4, 1],
      [1, 3],
      [3, 2],
    ],
    items: 4,
    nuisance: [-7, -5, -3, -1, 1, 3, 5, 7],
    restraint: [1, 1, 0, 0, 0],
  };

  test('four blocks with a linear drift (2.3.4.2.12)', () => {
    check(drift, {
      divisor: 168,
      rows: [
        [35, -35, -7, 7, -7],
        [-14, 14, 14, 42, -5],
        [-7, 7, 35, -35, -3],
        [-14, 14, -42, -14, -1],
        [-21, 21, -7, -49, 1],
        [-14, 14, 14, 42, 3],
        [21, -21, -49, -7, 5],
        [14, -14, 42, 14, 7],
        [84, 84, 84, 84, 0],
      ],
      dof: 4,
      factors: [
        [[1], 0.3227],
        [[0, 1], 0.3227],
        [[0, 0, 1], 0.5204],
        [[0, 0, 0, 1], 0.5204],
        [[1, -1], 0.6455],
      ],
    });
  });

  test('the drift of that design can be left out without changing the blocks', () => {
    const withDrift = solutionRows(drift).map((row) => row.slice(0, 4));
    const without = solutionRows({ comparisons: drift.comparisons, items: 4, restraint: [1, 1, 0, 0] });
    without.flat().forEach((entry, i) => {
      expect(Math.abs(entry - withDrift.flat()[i]!)).toBeLessThan(EXACT);
    });
  });

  test('four cells with a constant left-right offset (2.3.4.3.2); the offset is the plain mean of all twelve', () => {
    const comparisons: Comparison[] = [
      [1, 2],
      [1, 3],
      [2, 3],
      [2, 4],
      [3, 4],
      [3, 1],
      [3, 2],
      [4, 2],
      [4, 1],
      [4, 3],
      [2, 1],
      [1, 4],
    ];
    // The handbook restrains the mean of the four.
    const design: Design = {
      comparisons,
      items: 4,
      nuisance: comparisons.map(() => 1),
      restraint: [0.25, 0.25, 0.25, 0.25, 0],
    };
    const cells = comparisons.map(([plus, minus]) => [
      ...[1, 2, 3, 4].map((cell) => (cell === plus ? 1 : cell === minus ? -1 : 0)),
      8 / 12,
    ]);
    check(design, {
      divisor: 8,
      rows: [...cells, [8, 8, 8, 8, 0]],
      dof: 8,
      factors: [
        [[1], 0.3062],
        [[0, 1], 0.3062],
        [[0, 0, 1], 0.3062],
        [[0, 0, 0, 1], 0.3062],
      ],
    });
  });
});

test('two items weighed alone, as a difference and as a sum (Rice, chapter 14)', () => {
  const solution = leastSquaresByQr(
    [
      [1, 0],
      [0, 1],
      [1, -1],
      [1, 1],
    ],
    [3, 3, 1, 7],
  );
  const variance = solution.sumOfSquares / solution.dof;
  const u = (combination: readonly number[]) => Math.sqrt(variance) * factorOf(solution, combination);
  expect(solution.coefficients[0]).toBeCloseTo(11 / 3, 9);
  expect(solution.coefficients[1]).toBeCloseTo(3, 9);
  expect(solution.dof).toBe(2);
  expect(variance).toBeCloseTo(1 / 3, 9);
  expect(u([1])).toBeCloseTo(1 / 3, 9);
  expect(u([0, 1])).toBeCloseTo(1 / 3, 9);
  expect(u([1, -1])).toBeCloseTo(0.4714045208, 9);
  expect((solution.coefficients[0]! - solution.coefficients[1]!) / u([1, -1])).toBeCloseTo(Math.SQRT2, 9);
});
