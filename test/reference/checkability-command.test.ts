/** What can be checked, and how large a fault could hide, through the program's own input. The source stands beside each check. */
import { describe, expect, test } from 'vitest';
import { numberIn, type Reading, solveReadings, WRITTEN } from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

/** Units of level 10 + number each, every reading with u = 1 dB. */
const readings = (edges: readonly (readonly [number, number])[]): Reading[] =>
  edges.map(([i, j]) => [`U${i}`, `U${j}`, 20 + i + j, { u_db: 1 }]);

const complete = (n: number) =>
  Array.from({ length: n }, (_, i) =>
    Array.from({ length: n - 1 - i }, (_, k): readonly [number, number] => [i + 1, i + k + 2]),
  ).flat();

/**
 * W. Baarda (1968), A testing procedure for use in geodetic networks: smallest detectable shift = 4.132148 u / sqrt(r) for a risk of
 * 0.1 % and a power of 80 %, from memory, recomputed. Redundancy of a complete set: (n - 3)/(n - 1), derived.
 */
describe('complete sets', () => {
  test.each([
    [4, 7.15709],
    [5, 5.84374],
    [6, 5.33458],
    [7, 5.06083],
    [8, 4.88922],
    [9, 4.77139],
    [10, 4.68542],
  ])('%d units: the smallest detectable shift of every take is %d u', async (n, shift) => {
    const solved = await solveReadings(readings(complete(n)), [...RECIPROCAL, '--risk', '0.001']);
    const takes = solved.rows('takes.csv');
    expect(takes).toHaveLength((n * (n - 1)) / 2);
    for (const row of takes) expect(numberIn(row, 'smallest_shift_db')).toBeCloseTo(shift, 4);
  });

  test('a triangle has no smallest detectable shift: none is printed', async () => {
    const takes = (await solveReadings(readings(complete(3)), RECIPROCAL)).rows('takes.csv');
    expect(takes.map((row) => [row.verdict, row.smallest_shift_db])).toEqual(Array(3).fill(['uncheckable', '']));
  });
});

/** Derived: a ring of an odd number of units determines them and leaves nothing over. */
test.each([3, 5, 7, 9])('an odd ring of %d: every take is uncheckable', async (n) => {
  const ring = Array.from({ length: n }, (_, i): readonly [number, number] => [i + 1, ((i + 1) % n) + 1]);
  const takes = (await solveReadings(readings(ring), RECIPROCAL)).rows('takes.csv');
  expect(takes.map((row) => row.verdict)).toEqual(Array(n).fill('uncheckable'));
});

/** Complete set of four, closed form of B. Griffing (1956), method 4; numbers constructed, closures -86.0, -86.2, -86.1 dB. */
test('four units, six pairs: two independent loops, of the differences 0.2, 0.1 and 0.1 dB between the three closures', async () => {
  const solved = await solveReadings(
    [
      ['1', '2', -40.2],
      ['1', '3', -38.9],
      ['1', '4', -45.1],
      ['2', '3', -41.0],
      ['2', '4', -47.3],
      ['3', '4', -45.8],
    ],
    RECIPROCAL,
  );
  const closures = solved.rows('loops.csv').map((row) => Math.abs(numberIn(row, 'closure_db')));
  expect(closures).toHaveLength(2);
  for (const closure of closures) {
    expect(
      [0.1, 0.2].some((size) => Math.abs(closure - size) <= WRITTEN * 1.001),
      String(closure),
    ).toBe(true);
  }
});
