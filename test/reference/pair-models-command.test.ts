/** Published pair models through the program's own input. The source stands beside each check. */
import { describe, expect, test } from 'vitest';
import { covarianceAt } from '../command/covariance.ts';
import {
  misses,
  numberIn,
  type Reading,
  type Solved,
  solveReadings,
  uncertaintyMisses,
  WRITTEN,
} from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;
const DIRECTIONAL = ['--model', 'directional'] as const;

const u = (solved: Solved) => (unit: string) => numberIn(solved.response(unit), 'u_db');
const sum = (values: readonly number[]) => values.reduce((total, value) => total + value, 0);
const residuals = (solved: Solved) => solved.rows('residuals.csv').map((row) => numberIn(row, 'residual_db'));
const redundancies = (solved: Solved) => solved.rows('residuals.csv').map((row) => numberIn(row, 'redundancy'));

/**
 * Three-transducer reciprocity: IEC 60565-1:2020, IEC 61094-2:2009, R. J. Bobber, Underwater Electroacoustic Measurements
 * (1970): M1^2 = M-product of the pairs. In dB H1 = (L12 + L13 - L23)/2. Formula from memory, numbers constructed.
 */
describe('triangle with unequal uncertainties', () => {
  const readings: readonly Reading[] = [
    ['1', '2', -41.37, { u_db: 0.3 }],
    ['1', '3', -38.92, { u_db: 0.4 }],
    ['2', '3', -44.05, { u_db: 0.5 }],
  ];

  test('levels -18.12, -23.25, -20.80 dB; all three u are half of the root of the summed squares', async () => {
    const solved = await solveReadings(readings, RECIPROCAL);
    expect(misses(solved.level, { 1: -18.12, 2: -23.25, 3: -20.8 })).toEqual([]);
    expect(uncertaintyMisses(u(solved), { 1: 0.3535533906, 2: 0.3535533906, 3: 0.3535533906 })).toEqual([]);
  });

  test('covariances -0.08, -0.045 and 0 from the three uncertainties', async () => {
    const between = covarianceAt(await solveReadings(readings, RECIPROCAL), 1000);
    expect(between('1', '2')).toBeCloseTo(-0.08, 9);
    expect(between('1', '3')).toBeCloseTo(-0.045, 9);
    expect(between('2', '3')).toBeCloseTo(0, 9);
  });

  test('no degree of freedom: all redundancies 0, and it is said that nothing checks the result', async () => {
    const solved = await solveReadings(readings, RECIPROCAL);
    for (const r of redundancies(solved)) expect(Math.abs(r)).toBeLessThan(WRITTEN);
    expect(solved.stdout).toMatch(/check/i);
  });

  test('equal u: var(H) = 3/4 u^2', async () => {
    const solved = await solveReadings(
      readings.map(([a, b, level]): Reading => [a, b, level, { u_db: 0.4 }]),
      RECIPROCAL,
    );
    const expected = 0.4 * Math.sqrt(0.75);
    expect(uncertaintyMisses(u(solved), { 1: expected, 2: expected, 3: expected })).toEqual([]);
  });

  test('a common path of 5 dB with u_b enters every unit as half, fully correlated: u = sqrt(3 u^2 + u_b^2)/2', async () => {
    const through = readings.map(([a, b, level]): Reading => [a, b, level + 5, { u_db: 0.05, path: 'tank' }]);
    const solved = await solveReadings(through, [...RECIPROCAL, '--path', 'path.csv'], {
      'path.csv': 'path,frequency_hz,level_db,u_db\ntank,1000,5,0.02\n',
    });
    expect(misses(solved.level, { 1: -18.12, 2: -23.25, 3: -20.8 })).toEqual([]);
    expect(uncertaintyMisses(u(solved), { 1: 0.044441, 2: 0.044441, 3: 0.044441 })).toEqual([]);
  });
});

/** Closed form of the complete set: B. Griffing (1956), method 4, without the mean. Numbers constructed. */
describe('four units, six pairs', () => {
  const readings: readonly Reading[] = [
    ['1', '2', -40.2],
    ['1', '3', -38.9],
    ['1', '4', -45.1],
    ['2', '3', -41.0],
    ['2', '4', -47.3],
    ['3', '4', -45.8],
  ];

  test('levels, residuals, redundancy 1/3, and u = s sqrt(5/12) from the spare readings on 2 degrees of freedom', async () => {
    const solved = await solveReadings(readings, RECIPROCAL);
    expect(misses(solved.level, { 1: -19.05, 2: -21.2, 3: -19.8, 4: -26.05 })).toEqual([]);
    const left = Object.fromEntries(
      solved.rows('residuals.csv').map((row) => [`${row.emitter}${row.receiver}`, numberIn(row, 'residual_db')]),
    );
    expect(misses((pair) => left[pair]!, { 12: 0.05, 13: -0.05, 14: 0, 23: 0, 24: -0.05, 34: 0.05 })).toEqual([]);
    for (const r of redundancies(solved)) expect(r).toBeCloseTo(1 / 3, 6);
    expect(
      uncertaintyMisses(u(solved), { 1: 0.0456435465, 2: 0.0456435465, 3: 0.0456435465, 4: 0.0456435465 }),
    ).toEqual([]);
    for (const unit of ['1', '2', '3', '4']) expect(numberIn(solved.response(unit), 'dof')).toBeCloseTo(2, 6);
  });
});

/**
 * B. Griffing (1956), Concept of general and specific combining ability, Aust. J. Biol. Sci. 9, 463-493: closed forms, from
 * memory, and derived again from the normal equations. Parent values and misfits are constructed integers.
 */
describe('diallel of six parents', () => {
  const PARENTS = ['P1', 'P2', 'P3', 'P4', 'P5', 'P6'] as const;
  const VALUE = [31, 24, 27, 40, 18, 35] as const;
  /** A misfit of -2..2 that the pair sums do not explain. */
  const level = (i: number, j: number) => VALUE[i]! + VALUE[j]! + (((i + 2) * (j + 3) + i * j * j) % 5) - 2;
  const n = PARENTS.length;
  const all = (keep: (i: number, j: number) => boolean) =>
    PARENTS.flatMap((_, i) => PARENTS.flatMap((_, j): [number, number][] => (keep(i, j) ? [[i, j]] : [])));
  const asReadings = (cells: readonly [number, number][]) =>
    cells.map(([i, j]): Reading => [PARENTS[i]!, PARENTS[j]!, level(i, j)]);
  const expected = (values: readonly number[]) => Object.fromEntries(PARENTS.map((unit, i) => [unit, values[i]!]));

  test('method 4, crosses without selfs in one direction: H = (R - T/(n-1))/(n-2)', async () => {
    const cells = all((i, j) => i < j);
    const total = sum(cells.map(([i, j]) => level(i, j)));
    const values = PARENTS.map((_, p) => {
      const row = sum(cells.filter((pair) => pair.includes(p)).map(([i, j]) => level(i, j)));
      return (row - total / (n - 1)) / (n - 2);
    });
    const solved = await solveReadings(asReadings(cells), RECIPROCAL);
    expect(misses(solved.level, expected(values))).toEqual([]);
    // The general mean of the crosses is twice the mean of the units.
    expect(2 * (sum(PARENTS.map((unit) => solved.level(unit))) / n)).toBeCloseTo(total / cells.length, 5);
  });

  test('method 3, crosses without selfs in both directions: the same with the mean of each cross', async () => {
    const cells = all((i, j) => i !== j);
    const total = sum(cells.map(([i, j]) => level(i, j))) / 2;
    const values = PARENTS.map((_, p) => {
      const row = sum(cells.filter((pair) => pair.includes(p)).map(([i, j]) => level(i, j))) / 2;
      return (row - total / (n - 1)) / (n - 2);
    });
    const solved = await solveReadings(asReadings(cells), RECIPROCAL);
    expect(misses(solved.level, expected(values))).toEqual([]);
  });

  test('method 2, crosses in one direction with selfs as twin readings: m/2 + g = T/(n(n+1)) + (R + self - 2T/n)/(n+2)', async () => {
    const cells = all((i, j) => i <= j);
    const total = sum(cells.map(([i, j]) => level(i, j)));
    const values = PARENTS.map((_, p) => {
      const row = sum(cells.filter((pair) => pair.includes(p)).map(([i, j]) => level(i, j)));
      return total / (n * (n + 1)) + (row + level(p, p) - (2 * total) / n) / (n + 2);
    });
    const solved = await solveReadings(asReadings(cells), RECIPROCAL);
    expect(misses(solved.level, expected(values))).toEqual([]);
  });
});

/**
 * D. A. Kenny, The mathematics of the Social Relations Model (davidakenny.net/srm); R. M. Warner, D. A. Kenny, M. Stoto (1979),
 * J. Pers. Soc. Psychol. 37, 1742-1757. Data and emitter values as published there; the rest recomputed.
 */
describe('round robin of six, both directions', () => {
  const UNITS = ['A', 'B', 'C', 'D', 'E', 'F'] as const;
  const SEEN = ['- 4 5 6 7 5', '2 - 1 3 2 4', '5 4 - 3 2 6', '4 5 4 - 2 5', '1 4 4 3 - 3', '5 7 5 3 9 -'];
  const readings = SEEN.flatMap((line, i) =>
    line.split(' ').flatMap((cell, j): Reading[] => (cell === '-' ? [] : [[UNITS[i]!, UNITS[j]!, Number(cell)]])),
  );
  const EMIT = [1.2083333333, -1.625, -0.1666666667, -0.2083333333, -1.0833333333, 1.875];
  const RECEIVE = [-0.4583333333, 0.375, -0.3333333333, -0.5416666667, 0.0833333333, 0.875];
  const GRAND = 4.1;
  const S = 1.5537165403;

  test('emitters and receivers are as published around half of the grand mean, which the datum gives each side', async () => {
    const solved = await solveReadings(readings, DIRECTIONAL);
    const emit = Object.fromEntries(UNITS.map((unit, i) => [unit, GRAND / 2 + EMIT[i]!]));
    const receive = Object.fromEntries(UNITS.map((unit, i) => [unit, GRAND / 2 + RECEIVE[i]!]));
    expect(misses((unit) => solved.level(unit, { role: 'emit' }), emit)).toEqual([]);
    expect(misses((unit) => solved.level(unit, { role: 'receive' }), receive)).toEqual([]);
  });

  test('the published variance of emitters, 1.772, and that of receivers', async () => {
    const solved = await solveReadings(readings, DIRECTIONAL);
    const variance = (role: string) => {
      const levels = UNITS.map((unit) => solved.level(unit, { role }));
      const mean = sum(levels) / levels.length;
      return sum(levels.map((level) => (level - mean) ** 2)) / (levels.length - 1);
    };
    expect(variance('emit')).toBeCloseTo(1.7722222222, 5);
    expect(variance('receive')).toBeCloseTo(0.3055555556, 5);
  });

  test('residual sum of squares 45.8667 on 19 degrees of freedom, redundancy 19/30 for every reading', async () => {
    const solved = await solveReadings(readings, DIRECTIONAL);
    expect(sum(residuals(solved).map((residual) => residual ** 2))).toBeCloseTo(45.8666666667, 4);
    for (const r of redundancies(solved)) expect(r).toBeCloseTo(19 / 30, 6);
  });

  test('u of a centred emitter is s sqrt(25/144)', async () => {
    const between = covarianceAt(await solveReadings(readings, DIRECTIONAL), 1000);
    const names = UNITS.map((unit) => `${unit} emit`);
    const deviation = (i: number, k: number) => (i === k ? 1 : 0) - 1 / UNITS.length;
    UNITS.forEach((_, unit) => {
      const variance = sum(
        names.flatMap((one, i) =>
          names.map((other, j) => deviation(unit, i) * deviation(unit, j) * between(one, other)),
        ),
      );
      expect(Math.sqrt(variance)).toBeCloseTo((S * 5) / 12, 6);
    });
  });

  /** u of a centred emitter is s sqrt(25/144); the datum adds half of the grand mean, s/2 sqrt(1/30), uncorrelated with it. */
  test('u of every emitter and receiver is that of its deviation and of the datum, on 19 degrees of freedom', async () => {
    const solved = await solveReadings(readings, DIRECTIONAL);
    for (const row of solved.rows('responses.csv')) {
      expect(numberIn(row, 'u_db')).toBeCloseTo(S * Math.sqrt(25 / 144 + 1 / 120), 5);
      expect(numberIn(row, 'dof')).toBeCloseTo(19, 6);
    }
  });
});
