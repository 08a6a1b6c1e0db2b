/** The reciprocal model by hand, in integers: level = one unit + the other, so three pairs of three units settle all. */
import { describe, expect, test } from 'vitest';
import { misses, numberIn, type Reading, solveReadings, uncertaintyMisses } from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

const TRIANGLE: readonly Reading[] = [
  ['A', 'B', 10],
  ['A', 'C', 8],
  ['B', 'C', 6],
];

const MOUNTED: readonly Reading[] = [
  ['A', 'B', 10, { emitter_mount: 'bare' }],
  ['A', 'C', 8, { emitter_mount: 'bare' }],
  ['B', 'C', 6],
  ['A', 'B', 7, { emitter_mount: 'clamped' }],
];

describe('a triangle: 10, 8, 6', () => {
  test('the units are 6, 4 and 2, each half the sum of its two pairs less the third', async () => {
    const solved = await solveReadings(TRIANGLE, RECIPROCAL);
    expect(misses(solved.level, { A: 6, B: 4, C: 2 })).toEqual([]);
    for (const unit of ['A', 'B', 'C']) {
      const row = solved.response(unit);
      expect([row.role, row.status]).toEqual(['both', 'ok']);
    }
  });

  test('without any uncertainty given and without a spare reading none is printed, and never 0', async () => {
    const solved = await solveReadings(TRIANGLE, RECIPROCAL);
    for (const unit of ['A', 'B', 'C']) {
      const { u_db, k, expanded_db, dof } = solved.response(unit);
      expect([u_db, k, expanded_db, dof]).toEqual(['', '', '', '']);
    }
    expect(solved.said).toMatch(/uncertaint/i);
  });

  test('one figure for every reading reaches every unit as half the root of three', async () => {
    const solved = await solveReadings(TRIANGLE, [...RECIPROCAL, '--u', '0.2']);
    const u = 0.1 * Math.sqrt(3);
    expect(uncertaintyMisses((unit) => numberIn(solved.response(unit), 'u_db'), { A: u, B: u, C: u })).toEqual([]);
  });

  test('the same triangle with 12 dB more on each pair has 6 dB more on each unit', async () => {
    const solved = await solveReadings(
      TRIANGLE.map(([emitter, receiver, level]): Reading => [emitter, receiver, level + 12]),
      RECIPROCAL,
    );
    expect(misses(solved.level, { A: 12, B: 10, C: 8 })).toEqual([]);
  });

  test('who emitted does not matter', async () => {
    const solved = await solveReadings(
      [
        ['B', 'A', 10],
        ['A', 'C', 8],
        ['C', 'B', 6],
      ],
      RECIPROCAL,
    );
    expect(misses(solved.level, { A: 6, B: 4, C: 2 })).toEqual([]);
  });
});

describe('twin readings', () => {
  test('AA = 12, BB = 8, AB = 10 close: 6 and 4, nothing left over', async () => {
    const solved = await solveReadings(
      [
        ['A', 'A', 12],
        ['B', 'B', 8],
        ['A', 'B', 10],
      ],
      RECIPROCAL,
    );
    expect(misses(solved.level, { A: 6, B: 4 })).toEqual([]);
    for (const row of solved.rows('residuals.csv')) expect(Math.abs(numberIn(row, 'residual_db'))).toBeLessThan(1e-9);
  });

  /**
   * AB = 13 in place of 10: the middle one should lie half-way between AA and BB (common practice, no source).
   * Normal equations: a - b = 2, a + b = 11; misfits -1, -1, +2, and AA + BB - 2 AB = -6 is the closure of the loop.
   */
  test('AB = 13 leaves -1, -1, +2: a sixth, a sixth and a third of the closure of -6', async () => {
    const solved = await solveReadings(
      [
        ['A', 'A', 12],
        ['B', 'B', 8],
        ['A', 'B', 13],
      ],
      RECIPROCAL,
    );
    expect(misses(solved.level, { A: 6.5, B: 4.5 })).toEqual([]);
    const left = Object.fromEntries(
      solved.rows('residuals.csv').map((row) => [`${row.emitter}${row.receiver}`, numberIn(row, 'residual_db')]),
    );
    expect(misses((pair) => left[pair]!, { AA: -1, BB: -1, AB: 2 })).toEqual([]);
  });
});

describe('look-alikes', () => {
  /** Two look-alike units against each other each have half the level in dB (common practice, no source). */
  test('two look-alikes against each other have half of the level each, and pass it on', async () => {
    const solved = await solveReadings(
      [
        ['A', 'B', 10],
        ['A', 'C', 8],
      ],
      [...RECIPROCAL, '--lookalikes', 'A=B'],
    );
    expect(misses(solved.level, { A: 5, B: 5, C: 3 })).toEqual([]);
  });

  test('three look-alikes share one response: the mean of their half levels', async () => {
    const solved = await solveReadings(
      [
        ['A', 'B', 9],
        ['B', 'C', 10],
        ['A', 'C', 11],
      ],
      [...RECIPROCAL, '--lookalikes', 'A=B=C'],
    );
    expect(misses(solved.level, { A: 5, B: 5, C: 5 })).toEqual([]);
    const left = solved.rows('residuals.csv').map((row) => Math.round(numberIn(row, 'residual_db') * 1e6) / 1e6);
    expect(left.sort()).toEqual([-1, 0, 1]);
  });
});

describe('open pieces', () => {
  test('a pair apart from the triangle stays open and changes nothing in the triangle', async () => {
    const solved = await solveReadings([...TRIANGLE, ['D', 'E', 4]], RECIPROCAL);
    expect(misses(solved.level, { A: 6, B: 4, C: 2 })).toEqual([]);
    for (const unit of ['D', 'E'])
      expect([solved.response(unit).status, solved.response(unit).level_db]).toEqual(['open', '']);
  });

  test('one certificate in the pair closes it: 4 = 1 + 3', async () => {
    const solved = await solveReadings([...TRIANGLE, ['D', 'E', 4]], [...RECIPROCAL, '--refs', 'refs.csv'], {
      'refs.csv': 'unit,frequency_hz,level_db,u_db\nD,1000,1,0.1\n',
    });
    expect(misses(solved.level, { A: 6, B: 4, C: 2, D: 1, E: 3 })).toEqual([]);
  });
});

describe('mounts', () => {
  test('a unit has a response of its own in each mount', async () => {
    const solved = await solveReadings(MOUNTED, RECIPROCAL);
    expect(misses((mount) => solved.level('A', { mount }), { bare: 6, clamped: 3 })).toEqual([]);
    expect(misses(solved.level, { B: 4, C: 2 })).toEqual([]);
  });
});
