/** Background noise and the random error of spectra through the program's own input. The source stands beside each check. */
import { describe, expect, test } from 'vitest';
import { numberIn, type Reading, solveReadings } from '../command/solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

const triangle = (extra: Readonly<Record<string, string | number>>, shift = 0): Reading[] => [
  ['A', 'B', 10 + shift, extra],
  ['A', 'C', 8 + shift, extra],
  ['B', 'C', 6 + shift, extra],
];

/** ISO 3744:2010, ISO 3741: K1 = -10 lg(1 - 10^(-0.1 D)); values recomputed. */
describe('background noise', () => {
  test.each([
    [4, 2.204808],
    [5, 1.650885],
    [6, 1.256276],
    [8, 0.749404],
    [10, 0.457575],
  ])('noise %d dB below the level takes %d dB off it', async (clearance, correction) => {
    const noisy = triangle({}, 30).map(([a, b, level]): Reading => [a, b, level, { noise_db: level - clearance }]);
    const solved = await solveReadings(noisy, RECIPROCAL);
    const levels = solved.rows('residuals.csv').map((row) => numberIn(row, 'level_db'));
    expect(levels).toHaveLength(3);
    [40, 38, 36].forEach((level, i) => {
      expect(levels[i]).toBeCloseTo(level - correction, 5);
    });
  });

  test('noise 2 dB below the level makes a reading unused, with the reason', async () => {
    const readings: Reading[] = [...triangle({}, 30), ['A', 'B', 40, { repeat: 2, noise_db: 38 }]];
    const solved = await solveReadings(readings, RECIPROCAL);
    expect(solved.rows('residuals.csv')).toHaveLength(3);
    const unused = solved.rows('unused.csv');
    expect(unused.map((row) => row.line)).toEqual(['5']);
    expect(unused[0]!.reason).toMatch(/noise/i);
  });
});

/** J. Bendat, A. Piersol, Random Data: transfer-function magnitude sqrt((1 - g2)/(2 g2 n)), in dB by 20/ln 10; recomputed. */
describe('random error of a spectral estimate', () => {
  test.each([
    [0.9, 100, 0.2047284],
    [0.5, 100, 0.6141851],
  ])('coherence %d and %d averages: u = %d dB for each reading', async (coherence, averages, expected) => {
    const solved = await solveReadings(triangle({ coherence, averages }), RECIPROCAL);
    for (const row of solved.rows('residuals.csv')) expect(numberIn(row, 'u_db')).toBeCloseTo(expected, 5);
    const half = (expected * Math.sqrt(3)) / 2;
    for (const unit of ['A', 'B', 'C']) expect(numberIn(solved.response(unit), 'u_db')).toBeCloseTo(half, 5);
  });

  /** Exact in dB: (10/ln 10) sqrt(trigamma(n)); trigamma(100) = 0.010050166663, recomputed. First order would be 0.4342945. */
  test('100 averages without coherence: u = 0.4353825 dB by the trigamma function', async () => {
    const solved = await solveReadings(triangle({ averages: 100 }), RECIPROCAL);
    for (const row of solved.rows('residuals.csv')) expect(numberIn(row, 'u_db')).toBeCloseTo(0.4353825, 5);
  });
});
