/** What a set of pairs can tell, before any measured value: the uncertainties of a design, by solving it with u = 1 dB. */
import { describe, expect, test } from 'vitest';
import { covarianceAt } from '../command/covariance.ts';
import {
  longCsv,
  misses,
  numberIn,
  type Reading,
  type Solved,
  solveFiles,
  solveReadings,
  uncertaintyMisses,
  WRITTEN,
} from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

type Edge = readonly [number, number];

/** Units 1..n of level 10 + n dB each: an exact set, so that only the design speaks. */
const readings = (edges: readonly Edge[]): Reading[] =>
  edges.map(([i, j]) => [`U${i}`, `U${j}`, 20 + i + j, { u_db: 1 }]);

const complete = (n: number): Edge[] =>
  Array.from({ length: n }, (_, i) => Array.from({ length: n - 1 - i }, (_, k): Edge => [i + 1, i + k + 2])).flat();
const ring = (n: number, first = 1): Edge[] =>
  Array.from({ length: n }, (_, i): Edge => [first + i, first + ((i + 1) % n)]);
const chain = (from: number, to: number): Edge[] =>
  Array.from({ length: to - from }, (_, i): Edge => [from + i, from + i + 1]);

const u = (solved: Solved) => (unit: string) => numberIn(solved.response(unit), 'u_db');
const roots = (variances: readonly number[]) =>
  Object.fromEntries(variances.map((variance, i) => [`U${i + 1}`, Math.sqrt(variance)]));

/**
 * Derived from X'X = (n-2) I + J; n = 3 is A. M. Mood (1946), Ann. Math. Statist. 17, 432-446; agrees with B. Griffing (1956),
 * method 4.
 */
describe('complete sets', () => {
  const SETS = [
    [3, 0.75, -0.25, 2, 0],
    [4, 0.416666667, -0.083333333, 1, 1 / 3],
    [5, 0.291666667, -0.041666667, 0.666666667, 1 / 2],
    [6, 0.225, -0.025, 0.5, 3 / 5],
    [7, 0.183333333, -0.016666667, 0.4, 2 / 3],
    [8, 0.154761905, -0.011904762, 0.333333333, 5 / 7],
    [9, 0.133928571, -0.008928571, 0.285714286, 3 / 4],
    [10, 0.118055556, -0.006944444, 0.25, 7 / 9],
  ] as const;

  test.each(SETS)(
    '%d units: var(H) = %d, covariance %d, variance of a difference %d, redundancy %d',
    async (...row) => {
      const [n, variance, covariance, difference, redundancy] = row;
      const solved = await solveReadings(readings(complete(n)), RECIPROCAL);
      expect(uncertaintyMisses(u(solved), roots(Array(n).fill(variance)))).toEqual([]);
      const rows = solved.rows('residuals.csv');
      expect(rows).toHaveLength((n * (n - 1)) / 2);
      for (const reading of rows)
        expect(Math.abs(numberIn(reading, 'redundancy') - redundancy)).toBeLessThanOrEqual(WRITTEN);
      const between = covarianceAt(solved, 1000);
      for (const [i, j] of complete(n)) {
        const [one, other] = [`U${i}`, `U${j}`];
        expect(between(one, other)).toBeCloseTo(covariance, 8);
        expect(between(one, one) + between(other, other) - 2 * between(one, other)).toBeCloseTo(difference, 8);
      }
    },
  );
});

/** Derived: along an odd ring every variance is n/4, nothing is redundant, and covariances alternate with the distance. */
describe('odd rings', () => {
  test.each([3, 5, 7, 9])('%d units: var(H) = n/4, no redundancy', async (n) => {
    const solved = await solveReadings(readings(ring(n)), RECIPROCAL);
    expect(uncertaintyMisses(u(solved), roots(Array(n).fill(n / 4)))).toEqual([]);
    for (const row of solved.rows('residuals.csv')) expect(Math.abs(numberIn(row, 'redundancy'))).toBeLessThan(WRITTEN);
  });

  test('the covariances along a ring of five are 1.25, -0.75, 0.25, 0.25, -0.75', async () => {
    const between = covarianceAt(await solveReadings(readings(ring(5)), RECIPROCAL), 1000);
    [1.25, -0.75, 0.25, 0.25, -0.75].forEach((expected, i) => {
      expect(between('U1', `U${i + 1}`)).toBeCloseTo(expected, 8);
    });
  });
});

/** Derived from the normal equations of each design. */
describe('tails and stars', () => {
  test('a triangle with a chain on its third unit: 3/4 each, then one more for each link', async () => {
    const solved = await solveReadings(readings([...ring(3), ...chain(3, 7)]), RECIPROCAL);
    expect(uncertaintyMisses(u(solved), roots([0.75, 0.75, 0.75, 1.75, 2.75, 3.75, 4.75]))).toEqual([]);
  });

  test.each([4, 5, 6])(
    'a star of %d with the single pair 2-3: 3/4 for 1, 2, 3 and 7/4 for each further leaf',
    async (n) => {
      const leaves = Array.from({ length: n - 1 }, (_, i): Edge => [1, i + 2]);
      const solved = await solveReadings(readings([...leaves, [2, 3]]), RECIPROCAL);
      expect(uncertaintyMisses(u(solved), roots([0.75, 0.75, 0.75, ...Array(n - 3).fill(1.75)]))).toEqual([]);
    },
  );

  /** All simple graphs of four units enumerated: with five pairs the smallest summed variance is 2.5, with six 5/3. */
  test('five pairs of four units: summed variance 2.5', async () => {
    const solved = await solveReadings(readings(complete(4).slice(0, 5)), RECIPROCAL);
    const total = ['U1', 'U2', 'U3', 'U4'].reduce((sum, unit) => sum + u(solved)(unit) ** 2, 0);
    expect(total).toBeCloseTo(2.5, 5);
  });
});

/**
 * D. Cvetkovic, P. Rowlinson, S. Simic (2007), Linear Algebra Appl. 423, 155-171: the sum model is solvable exactly where every
 * connected part holds an odd loop (or a known unit, or a twin reading).
 */
describe('solvability', () => {
  const BIPARTITE_3_3 = [1, 2, 3].flatMap((i) => [4, 5, 6].map((j): Edge => [i, j]));
  const range = (from: number, to: number) => Array.from({ length: to - from + 1 }, (_, i) => `U${from + i}`);

  const CASES: readonly { set: string; edges: readonly Edge[]; solved: readonly string[]; open: readonly string[] }[] =
    [
      { set: 'a path of four', edges: chain(1, 4), solved: [], open: range(1, 4) },
      { set: 'a ring of four', edges: ring(4), solved: [], open: range(1, 4) },
      { set: 'three against three', edges: BIPARTITE_3_3, solved: [], open: range(1, 6) },
      { set: 'a triangle and a separate pair', edges: [...ring(3), [4, 5]], solved: range(1, 3), open: range(4, 5) },
      { set: 'a triangle with a tail', edges: [...ring(3), [3, 4]], solved: range(1, 4), open: [] },
      { set: 'two triangles', edges: [...ring(3), ...ring(3, 4)], solved: range(1, 6), open: [] },
      {
        set: 'a ring of five and a ring of four',
        edges: [...ring(5), ...ring(4, 6)],
        solved: range(1, 5),
        open: range(6, 9),
      },
      { set: 'a path of four with a twin reading', edges: [...chain(1, 4), [1, 1]], solved: range(1, 4), open: [] },
    ];

  test.each(CASES)('$set', async ({ edges, solved: determined, open }) => {
    const solved = await solveFiles({ 'pairs.csv': longCsv(readings(edges)) }, ['pairs.csv', ...RECIPROCAL]);
    expect(solved.code, solved.said).toBe(determined.length > 0 ? 0 : 4);
    for (const unit of open) expect(solved.said).toMatch(new RegExp(`\\b${unit}\\b`));
    if (solved.code !== 0) return;
    expect(
      misses(solved.level, Object.fromEntries(determined.map((unit) => [unit, 10 + Number(unit.slice(1))]))),
    ).toEqual([]);
    const rows = solved.rows('responses.csv');
    expect(rows.filter((row) => row.status === 'open').map((row) => row.unit)).toEqual(open);
    expect(rows.filter((row) => row.status === 'open' && row.level_db !== '')).toEqual([]);
  });

  test('one known unit makes a ring of four solvable', async () => {
    const solved = await solveReadings(readings(ring(4)), [...RECIPROCAL, '--refs', 'refs.csv'], {
      'refs.csv': 'unit,frequency_hz,level_db,u_db\nU2,1000,12,0.5\n',
    });
    expect(misses(solved.level, { U1: 11, U2: 12, U3: 13, U4: 14 })).toEqual([]);
    expect(solved.rows('responses.csv').map((row) => row.status)).toEqual(Array(4).fill('ok'));
  });
});
