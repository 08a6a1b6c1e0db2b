/** Bands and power means through the program's own input. The source stands beside each check. */
import { describe, expect, test } from 'vitest';
import { numberIn, type Reading, type Solved, solveReadings } from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

const triangle = (extra: Readonly<Record<string, string | number>>, shift = 0): Reading[] => [
  ['A', 'B', 10 + shift, extra],
  ['A', 'C', 8 + shift, extra],
  ['B', 'C', 6 + shift, extra],
];

/** 60 lines a decade from 20 Hz to 20 kHz: several lines in every band down to 1/12 octave. */
const lines = Array.from({ length: 361 }, (_, i) => 20 * 10 ** (i / 120));

/**
 * IEC 61260-1:2014, equations 1 to 5: G = 10^(3/10), mid-band 1000 G^(x/b) for odd b, 1000 G^((2x+1)/(2b)) for even b.
 * Figures of the table recomputed; nominal third-octaves 630, 800, 1000, 1250, 1600, 20000 of annex E.
 */
describe('fractional-octave bands', () => {
  const G = 10 ** 0.3;
  const placeIn = (b: number, frequency: number) => {
    const exponent = (Math.log(frequency / 1000) / Math.log(G)) * b;
    return b % 2 === 1 ? exponent : exponent - 0.5;
  };
  const frequencies = (solved: Solved) =>
    [...new Set(solved.rows('responses.csv').map((row) => numberIn(row, 'frequency_hz')))].sort((x, y) => x - y);
  const on = (grid: string) =>
    solveReadings(
      lines.flatMap((frequency_hz) => triangle({ frequency_hz })),
      [...RECIPROCAL, '--grid', grid],
    );
  /** Frequencies are written to at least nine digits, x is a thousandth of that. */
  const WHOLE = 1e-5;

  test.each([
    ['1/3', 3],
    ['1/6', 6],
    ['1/12', 12],
    ['1/24', 24],
  ] as const)('--grid %s: every frequency of the responses is an exact mid-band, without a gap', async (grid, b) => {
    const places = frequencies(await on(grid)).map((frequency) => placeIn(b, frequency));
    expect(places.length).toBeGreaterThan(8 * b);
    for (const place of places) expect(Math.abs(place - Math.round(place))).toBeLessThan(WHOLE);
    places.slice(1).forEach((place, i) => {
      expect(Math.round(place - places[i]!)).toBe(1);
    });
  });

  test.each([
    ['1/3', [125.8925, 630.9573, 794.3282, 1000, 1258.9254, 1584.8932]],
    ['1/6', [944.0609, 1059.2537, 1188.5022]],
  ] as const)('--grid %s holds the mid-bands of the table', async (grid, expected) => {
    const found = frequencies(await on(grid));
    for (const mid of expected)
      expect(Math.min(...found.map((frequency) => Math.abs(frequency - mid)))).toBeLessThan(1e-4);
  });

  test('a level that does not change along frequency is the same in every band', async () => {
    const solved = await on('1/3');
    expect(frequencies(solved).length).toBeLessThan(lines.length / 10);
    for (const row of solved.rows('responses.csv')) {
      expect(numberIn(row, 'level_db')).toBeCloseTo({ A: 6, B: 4, C: 2 }[row.unit!]!, 6);
    }
  });

  /** Energy mean of 60 and 66 dB, derived: 10 lg((10^6 + 10^6.6)/2). */
  test('the level of a band is the power mean of its lines: 60 and 66 dB make 63.962928', async () => {
    // Lines every 2 Hz across the whole band, 891.25 to 1122.02 Hz, and into both neighbours, in turn 66 and 60 dB.
    const comb = Array.from({ length: 140 }, (_, i) => 870 + 2 * i);
    const solved = await solveReadings(
      comb.flatMap((frequency_hz, i) =>
        triangle({ frequency_hz }).map(([a, b, , extra]): Reading => [a, b, i % 2 === 0 ? 66 : 60, extra!]),
      ),
      [...RECIPROCAL, '--grid', '1/3'],
    );
    const rows = solved.rows('residuals.csv');
    expect(rows).toHaveLength(3);
    for (const row of rows) expect(numberIn(row, 'level_db')).toBeCloseTo(63.962928, 5);
  });
});
