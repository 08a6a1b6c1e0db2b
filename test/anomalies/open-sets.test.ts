/**
 * Sets that cannot be solved, or only in part: what is open is named, and gets no number.
 * Source of the rule: D. Cvetkovic, P. Rowlinson, S. Simic (2007), Linear Algebra Appl. 423, 155-171: a connected part of
 * pair sums is solvable exactly if it holds an odd loop.
 */
import { describe, expect, test } from 'vitest';
import { longCsv, type Reading, type Solved, solveFiles } from '../command/solve-folder.ts';
import { STACK } from './stack.ts';

const reciprocal = (readings: readonly Reading[], more: readonly string[] = []) =>
  solveFiles({ 'pairs.csv': longCsv(readings) }, ['pairs.csv', '--model', 'reciprocal', ...more]);

const names = (text: string, units: readonly string[]) =>
  units.filter((unit) => new RegExp(`(?<![\\w-])${unit}(?![\\w-])`).test(text));

/** Nothing told apart: exit 4, every unit named on stderr, and no level anywhere, if anything was written at all. */
const expectNothing = (solved: Solved, units: readonly string[]) => {
  expect(solved.stderr).not.toMatch(STACK);
  expect(solved.code, solved.said).toBe(4);
  expect(names(solved.stderr, units)).toEqual(units);
  const partly = solved.added.filter((name) => name !== 'out');
  expect(partly).toEqual([]);
  if (solved.added.length > 0) {
    const rows = solved.rows('responses.csv');
    expect(new Set(rows.map((row) => row.unit))).toEqual(new Set(units));
    for (const row of rows) expect([row.status, row.level_db, row.u_db]).toEqual(['open', '', '']);
    expect(solved.text('summary.json')).toBeDefined();
  }
};

describe('nothing can be told apart', () => {
  test('an even ring is reported as open, and every unit of it is named', async () => {
    const ring: Reading[] = [
      ['north', 'east', 10],
      ['east', 'south', 8],
      ['south', 'west', 7],
      ['west', 'north', 9],
    ];
    expectNothing(await reciprocal(ring), ['north', 'east', 'south', 'west']);
  });

  test('an even ring of six, which rounding can make look solvable, is open as well', async () => {
    const ring: Reading[] = Array.from({ length: 6 }, (_, i) => [`U${i}`, `U${(i + 1) % 6}`, 0.1 + i / 3]);
    expectNothing(
      await reciprocal(ring),
      ring.map(([emitter]) => emitter),
    );
  });

  test('a single pair gives only a sum', async () => {
    expectNothing(await reciprocal([['left', 'right', 12]]), ['left', 'right']);
  });

  test('a triangle whose bands never overlap holds no loop at any frequency', async () => {
    const apart: Reading[] = [
      ['one', 'two', 10, { frequency_hz: 1000 }],
      ['one', 'two', 11, { frequency_hz: 1100 }],
      ['two', 'three', 6, { frequency_hz: 3000 }],
      ['two', 'three', 7, { frequency_hz: 3100 }],
      ['one', 'three', 8, { frequency_hz: 5000 }],
      ['one', 'three', 9, { frequency_hz: 5100 }],
    ];
    expectNothing(await reciprocal(apart), ['one', 'two', 'three']);
  });
});

describe('a part can be told apart', () => {
  test('of two islands, a triangle and a pair, the triangle is solved and both units of the pair are open and named', async () => {
    const solved = await reciprocal([
      ['A', 'B', 10],
      ['A', 'C', 8],
      ['B', 'C', 6],
      ['yonder', 'beyond', 4],
    ]);
    expect(solved.code, solved.said).toBe(0);
    expect(['A', 'B', 'C'].map((unit) => solved.level(unit))).toEqual([6, 4, 2]);
    expect(['A', 'B', 'C'].map((unit) => solved.response(unit).status)).toEqual(['ok', 'ok', 'ok']);
    for (const unit of ['yonder', 'beyond']) {
      const { status, level_db, u_db, k, expanded_db } = solved.response(unit);
      expect([status, level_db, u_db, k, expanded_db]).toEqual(['open', '', '', '', '']);
    }
    expect(names(solved.said, ['yonder', 'beyond'])).toEqual(['yonder', 'beyond']);
    expect(solved.rows('residuals.csv')).toHaveLength(4);
  });

  test('two islands that are triangles are both solved', async () => {
    const solved = await reciprocal([
      ['A', 'B', 10],
      ['A', 'C', 8],
      ['B', 'C', 6],
      ['D', 'E', 14],
      ['D', 'F', 12],
      ['E', 'F', 10],
    ]);
    expect(solved.code, solved.said).toBe(0);
    expect(['A', 'B', 'C', 'D', 'E', 'F'].map((unit) => solved.level(unit))).toEqual([6, 4, 2, 8, 6, 4]);
  });

  test('frequencies are judged one by one: open at one, solved at the next', async () => {
    const solved = await reciprocal([
      ['A', 'B', 10, { frequency_hz: 1000 }],
      ['A', 'C', 8, { frequency_hz: 1000 }],
      ['B', 'C', 6, { frequency_hz: 1000 }],
      ['A', 'B', 10, { frequency_hz: 2000 }],
      ['A', 'C', 8, { frequency_hz: 2000 }],
    ]);
    expect(solved.code, solved.said).toBe(0);
    expect(['A', 'B', 'C'].map((unit) => solved.level(unit, { frequency: 1000 }))).toEqual([6, 4, 2]);
    for (const unit of ['A', 'B', 'C']) {
      const { status, level_db } = solved.response(unit, { frequency: 2000 });
      expect([status, level_db]).toEqual(['open', '']);
    }
  });

  test('a unit measured against itself alone has half the level', async () => {
    const solved = await reciprocal([['solo', 'solo', 12]]);
    expect(solved.code, solved.said).toBe(0);
    expect([solved.level('solo'), solved.response('solo').status]).toEqual([6, 'ok']);
  });

  test('--datum balanced fixes an even ring by equal means of its two sides, and says that it rests on the datum', async () => {
    const solved = await reciprocal(
      [
        ['A', 'B', 10],
        ['B', 'C', 8],
        ['C', 'D', 6],
        ['D', 'A', 8],
      ],
      ['--datum', 'balanced'],
    );
    expect(solved.code, solved.said).toBe(0);
    // A - C = 2 and B - D = 2 whatever the datum; mean(A, C) = mean(B, D) = a quarter of 10 + 6.
    expect(['A', 'B', 'C', 'D'].map((unit) => solved.level(unit))).toEqual([5, 5, 3, 3]);
    expect(['A', 'B', 'C', 'D'].map((unit) => solved.response(unit).status)).toEqual(Array(4).fill('datum'));
  });
});
