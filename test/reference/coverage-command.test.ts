/**
 * Coverage factors as the user sees them. Source: JCGM 100:2008 (GUM), table G.2, recomputed to three decimals.
 * Complete and thinned sets of pairs without any given u leave pairs - units degrees of freedom.
 */
import { describe, expect, test } from 'vitest';
import { numberIn, type Reading, solveReadings } from '../command/solve-folder.ts';

/** The table has three decimals. */
const PRINTED = 5e-4;

type Row = readonly [dof: number, units: number, pairs: number, k90: number, k95: number, k9545: number, k99: number];

const TABLE: readonly Row[] = [
  [1, 4, 5, 6.314, 12.706, 13.968, 63.657],
  [2, 4, 6, 2.92, 4.303, 4.527, 9.925],
  [3, 5, 8, 2.353, 3.182, 3.307, 5.841],
  [4, 5, 9, 2.132, 2.776, 2.869, 4.604],
  [5, 5, 10, 2.015, 2.571, 2.649, 4.032],
  [6, 6, 12, 1.943, 2.447, 2.517, 3.707],
  [7, 6, 13, 1.895, 2.365, 2.429, 3.499],
  [8, 6, 14, 1.86, 2.306, 2.366, 3.355],
  [9, 6, 15, 1.833, 2.262, 2.32, 3.25],
];

/** The pairs of a complete set, last ones left out; every level is off by a little of its own. */
const readings = (units: number, pairs: number): Reading[] =>
  Array.from({ length: units }, (_, i) =>
    Array.from({ length: units - 1 - i }, (_, k): Reading => {
      const j = i + k + 1;
      return [`U${i}`, `U${j}`, 20 + 3 * i + 2 * j + 0.1 * (((i + 1) * (j + 2) * (i + j)) % 7)];
    }),
  )
    .flat()
    .slice(0, pairs);

/** Every row at 95 %, which users see; three of them at the other levels. */
const SOME = TABLE.filter(([dof]) => dof === 1 || dof === 4 || dof === 9);

describe.each([
  [0.9, 3, SOME],
  [0.95, 4, TABLE],
  [0.9545, 5, SOME],
  [0.99, 6, SOME],
] as const)('--coverage %d', (coverage, column, table) => {
  test.each(table)('%d degrees of freedom (%d units, %d pairs)', async (...row) => {
    const [dof, units, pairs] = row;
    const solved = await solveReadings(readings(units, pairs), [
      '--model',
      'reciprocal',
      '--coverage',
      String(coverage),
    ]);
    for (const response of solved.rows('responses.csv')) {
      expect(numberIn(response, 'dof')).toBeCloseTo(dof, 6);
      expect(Math.abs(numberIn(response, 'k') - row[column])).toBeLessThanOrEqual(PRINTED);
      const expanded = numberIn(response, 'k') * numberIn(response, 'u_db');
      expect(numberIn(response, 'expanded_db')).toBeCloseTo(expanded, 4);
    }
  });
});

test.each([
  [0.9, 1.645],
  [0.95, 1.96],
  [0.9545, 2],
  [0.99, 2.576],
])('a given u is known exactly: --coverage %d is k = %d', async (coverage, k) => {
  const given = readings(4, 6).map(([a, b, level]): Reading => [a, b, level, { u_db: 0.5 }]);
  const solved = await solveReadings(given, ['--model', 'reciprocal', '--coverage', String(coverage)]);
  for (const response of solved.rows('responses.csv')) {
    expect(Math.abs(numberIn(response, 'k') - k)).toBeLessThanOrEqual(PRINTED);
  }
});
