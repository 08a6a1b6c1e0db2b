/** What the findings say of sets that can be judged by hand, in integers (units 6, 4, 2). */
import { describe, expect, test } from 'vitest';
import { numberIn, type Reading, solveReadings, WRITTEN } from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

const TRIANGLE: readonly Reading[] = [
  ['A', 'B', 10],
  ['A', 'C', 8],
  ['B', 'C', 6],
];

test('an exact fit checks nothing: every take is uncheckable, not agreed', async () => {
  const solved = await solveReadings(TRIANGLE, [...RECIPROCAL, '--u', '0.2']);
  expect(solved.rows('takes.csv').map((row) => row.verdict)).toEqual(['uncheckable', 'uncheckable', 'uncheckable']);
  for (const row of solved.rows('residuals.csv')) expect(Math.abs(numberIn(row, 'redundancy'))).toBeLessThan(WRITTEN);
});

test('uncertainties for a new seating and another partner are empty where nothing was seated twice', async () => {
  const solved = await solveReadings(TRIANGLE, [...RECIPROCAL, '--u', '0.2']);
  for (const unit of ['A', 'B', 'C']) {
    const { u_reseat_db, u_partner_db } = solved.response(unit);
    expect([u_reseat_db, u_partner_db]).toEqual(['', '']);
  }
});

describe('loops', () => {
  /** With AA, BB, AB the middle one lies half-way between the others (common practice, no source). */
  test('AA = 12, BB = 8, AB = 13: one loop, which fails to close by 6, or 3 per middle reading', async () => {
    const solved = await solveReadings(
      [
        ['A', 'A', 12],
        ['B', 'B', 8],
        ['A', 'B', 13],
      ],
      RECIPROCAL,
    );
    const closures = solved.rows('loops.csv').map((row) => Math.abs(numberIn(row, 'closure_db')));
    expect(closures).toHaveLength(1);
    expect(
      [3, 6].some((size) => Math.abs(closures[0]! - size) < WRITTEN),
      String(closures),
    ).toBe(true);
  });

  test('a ring of four with a diagonal: 10 - 8 + 5 - 6 leaves 1, with u of twice 0.5', async () => {
    const solved = await solveReadings(
      [
        ['A', 'B', 10],
        ['B', 'C', 8],
        ['C', 'D', 5],
        ['D', 'A', 6],
        ['A', 'C', 9],
      ],
      [...RECIPROCAL, '--u', '0.5'],
    );
    const loops = solved.rows('loops.csv');
    expect(loops).toHaveLength(1);
    expect(Math.abs(numberIn(loops[0]!, 'closure_db'))).toBeCloseTo(1, 6);
    expect(numberIn(loops[0]!, 'u_db')).toBeCloseTo(1, 5);
    expect(Math.abs(numberIn(loops[0]!, 'standardised'))).toBeCloseTo(1, 3);
  });

  test('a tree with one triangle has no even loop to close', async () => {
    const solved = await solveReadings([...TRIANGLE, ['C', 'D', 5]], RECIPROCAL);
    expect(solved.rows('loops.csv')).toEqual([]);
  });
});

test('a unit in two mounts: the difference of 3 dB between them is listed once', async () => {
  const solved = await solveReadings(
    [
      ['A', 'B', 10, { emitter_mount: 'bare' }],
      ['A', 'C', 8, { emitter_mount: 'bare' }],
      ['B', 'C', 6],
      ['A', 'B', 7, { emitter_mount: 'clamped' }],
    ],
    RECIPROCAL,
  );
  const differences = solved.rows('mounts.csv');
  expect(differences).toHaveLength(1);
  const { unit, mount_a, mount_b } = differences[0]!;
  expect([unit, [mount_a, mount_b].sort()]).toEqual(['A', ['bare', 'clamped']]);
  const sign = mount_a === 'bare' ? 1 : -1;
  expect(sign * numberIn(differences[0]!, 'difference_db')).toBeCloseTo(3, 6);
});
