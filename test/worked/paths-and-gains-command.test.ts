/** What lies between the units, and gains that were moved, by hand in integers (units 6, 4, 2). */
import { describe, expect, test } from 'vitest';
import { misses, type Reading, type Solved, solveReadings } from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

const triangle = (shift: number, extra: Readonly<Record<string, string>>): Reading[] => [
  ['A', 'B', 10 + shift, extra],
  ['A', 'C', 8 + shift, extra],
  ['B', 'C', 6 + shift, extra],
];

const differences = (solved: Solved) => (name: string) => {
  const [one, other] = name.split('-');
  return solved.level(one!) - solved.level(other!);
};

const BETWEEN = { 'A-B': 2, 'B-C': 2, 'A-C': 4 };

describe('paths', () => {
  test('a single path is part of every level: each unit holds half of it', async () => {
    const solved = await solveReadings(triangle(4, { path: 'block' }), RECIPROCAL);
    expect(misses(solved.level, { A: 8, B: 6, C: 4 })).toEqual([]);
  });

  test('a path whose level is given is taken out of every level', async () => {
    const solved = await solveReadings(triangle(4, { path: 'block' }), [...RECIPROCAL, '--path', 'paths.csv'], {
      'paths.csv': 'path,frequency_hz,level_db\nblock,1000,4\n',
    });
    expect(misses(solved.level, { A: 6, B: 4, C: 2 })).toEqual([]);
  });

  test('two paths with given levels, 2 and 6 dB, give the units themselves', async () => {
    const readings = [...triangle(2, { path: 'short' }), ...triangle(6, { path: 'long' })];
    const solved = await solveReadings(readings, [...RECIPROCAL, '--path', 'paths.csv'], {
      'paths.csv': 'path,frequency_hz,level_db\nshort,1000,2\nlong,1000,6\n',
    });
    expect(misses(solved.level, { A: 6, B: 4, C: 2 })).toEqual([]);
  });

  test('several paths of unknown level leave the differences between units as they are, with nothing left over', async () => {
    const readings = [...triangle(2, { path: 'short' }), ...triangle(6, { path: 'long' })];
    const solved = await solveReadings(readings, RECIPROCAL);
    expect(misses(differences(solved), BETWEEN)).toEqual([]);
    for (const row of solved.rows('residuals.csv')) expect(Math.abs(Number(row.residual_db))).toBeLessThan(1e-9);
  });

  test('--path none ignores the column: pairs are averaged over the paths', async () => {
    const readings = [...triangle(0, { path: 'short' }), ...triangle(2, { path: 'long' })];
    const solved = await solveReadings(readings, [...RECIPROCAL, '--path', 'none']);
    expect(misses(solved.level, { A: 6.5, B: 4.5, C: 2.5 })).toEqual([]);
  });
});

/** Moving a gain by g dB in the reciprocal model moves every H by g/2 and no difference between units (common practice, no source). */
describe('gains', () => {
  test.each([0, 6, -20])('a gain of %d dB in a single session moves every unit by half of it', async (g) => {
    const solved = await solveReadings(triangle(g, { session: 'morning' }), RECIPROCAL);
    expect(misses(solved.level, { A: 6 + g / 2, B: 4 + g / 2, C: 2 + g / 2 })).toEqual([]);
  });

  test.each([7, -5])('--loose-gain: a session moved by %d dB changes no difference between units', async (g) => {
    const readings = [...triangle(0, { session: 'morning' }), ...triangle(g, { session: 'evening' })];
    const solved = await solveReadings(readings, [...RECIPROCAL, '--loose-gain']);
    expect(misses(differences(solved), BETWEEN)).toEqual([]);
    for (const row of solved.rows('residuals.csv')) expect(Math.abs(Number(row.residual_db))).toBeLessThan(1e-9);
  });

  test('--loose-gain: a session that holds one pair only takes its gain from that pair, and the rest is untouched', async () => {
    const readings: Reading[] = [...triangle(0, { session: 'morning' }), ['A', 'B', 19, { session: 'evening' }]];
    const solved = await solveReadings(readings, [...RECIPROCAL, '--loose-gain']);
    expect(misses(differences(solved), BETWEEN)).toEqual([]);
  });

  test('a tight gain that was moved is not explained away: the two sessions disagree by the 4 dB between them', async () => {
    const readings = [...triangle(0, { session: 'morning' }), ...triangle(4, { session: 'evening' })];
    const solved = await solveReadings(readings, RECIPROCAL);
    expect(misses(solved.level, { A: 7, B: 5, C: 3 })).toEqual([]);
    const left = solved.rows('residuals.csv').map((row) => Math.abs(Number(row.residual_db)));
    for (const residual of left) expect(residual).toBeCloseTo(2, 6);
  });
});
