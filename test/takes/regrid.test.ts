import { describe, expect, it } from 'vitest';
import { octaveBand } from '../../src/quantity/octave-bands.ts';
import { decadePoint, type Spectrum, toOctaveBands, toPointsPerDecade } from '../../src/takes/regrid.ts';

const spectrum = (frequency: readonly number[], level: readonly number[], u = Number.NaN): Spectrum => ({
  frequency,
  level,
  uncertainty: frequency.map(() => u),
});
const NOTHING = spectrum([], []);

describe('power mean in fractional-octave bands', () => {
  const lines = Array.from({ length: 41 }, (_, k) => 880 + 10 * k);

  it('leaves a flat spectrum flat and keeps whole bands only', () => {
    const { frequency, level, empty } = toOctaveBands(
      spectrum(
        lines,
        lines.map(() => -7),
      ),
      3,
    );
    expect(frequency).toEqual([1000, octaveBand(1, 3).mid].slice(0, frequency.length));
    expect(frequency).toHaveLength(1);
    for (const value of level) expect(value).toBeCloseTo(-7, 12);
    // The band below is cut at 880 Hz, the one above at 1280 Hz.
    expect(empty).toBe(2);
  });

  it('averages power, not decibels: 60 and 66 dB give 63.962928 dB', () => {
    const { level } = toOctaveBands(spectrum([892, 1122], [60, 66]), 3);
    expect(level[0]).toBeCloseTo(63.962928, 6);
  });

  it('u of n equal readings is u / √n, and a reading 100 dB below the others adds nothing', () => {
    const four = toOctaveBands(spectrum([892, 950, 1030, 1122], [-7, -7, -7, -7], 0.4), 3);
    expect(four.uncertainty[0]).toBeCloseTo(0.2, 12);
    const two = toOctaveBands(spectrum([892, 1122], [-7, -107], 0.4), 3);
    expect(two.uncertainty[0]).toBeCloseTo(0.4, 9);
  });

  it('the stronger of two readings counts by its share of the power', () => {
    // Powers 1 and 10^0.6; u = 0.4 √(1 + 10^1.2) / (1 + 10^0.6).
    const { uncertainty } = toOctaveBands(spectrum([892, 1122], [60, 66], 0.4), 3);
    expect(uncertainty[0]).toBeCloseTo((0.4 * Math.sqrt(1 + 10 ** 1.2)) / (1 + 10 ** 0.6), 12);
  });

  it('has no uncertainty where one reading of the band has none', () => {
    const some = { frequency: [892, 1122], level: [-7, -7], uncertainty: [0.4, Number.NaN] };
    expect(toOctaveBands(some, 3).uncertainty[0]).toBeNaN();
  });

  it('makes nothing of nothing, and nothing of one reading', () => {
    expect(toOctaveBands(NOTHING, 3)).toMatchObject({ frequency: [], empty: 0 });
    expect(toOctaveBands(spectrum([1000], [-7]), 3)).toMatchObject({ frequency: [], empty: 1 });
  });

  it('leaves bands inside the take empty where no reading falls into them', () => {
    // One reading an octave, at the mid-bands: of the third-octaves between them nothing is known.
    const octaves = [-2, -1, 0, 1, 2].map((x) => octaveBand(x, 1).mid);
    const { frequency, empty } = toOctaveBands(
      spectrum(
        octaves,
        octaves.map(() => 0),
      ),
      3,
    );
    expect(frequency).toHaveLength(5);
    expect(empty).toBe(8);
  });

  it('takes a band with very many readings', () => {
    const many = Array.from({ length: 300_000 }, (_, k) => 700 + k / 400);
    const { level } = toOctaveBands(
      spectrum(
        many,
        many.map(() => -3),
      ),
      1,
    );
    expect(level).toHaveLength(1);
    expect(level[0]).toBeCloseTo(-3, 9);
  });
});

describe('interpolation at points per decade', () => {
  it('is linear in level over log frequency, and exact at a reading', () => {
    const { frequency, level } = toPointsPerDecade(spectrum([100, 1000], [-40, -20]), 4);
    expect(frequency).toEqual([-4, -3, -2, -1, 0].map((k) => decadePoint(k, 4)));
    [-40, -35, -30, -25, -20].forEach((value, k) => {
      expect(level[k]).toBeCloseTo(value, 12);
    });
  });

  it('takes both neighbours as independent: u / √2 half way between two equal ones', () => {
    const { uncertainty } = toPointsPerDecade(spectrum([100, 1000], [0, 0], 0.2), 2);
    expect(uncertainty[0]).toBe(0.2);
    expect(uncertainty[1]).toBeCloseTo(0.2 / Math.SQRT2, 12);
    expect(uncertainty[2]).toBe(0.2);
  });

  it('never goes beyond the ends of the take', () => {
    const { frequency } = toPointsPerDecade(spectrum([101, 300, 999], [0, 0, 0]), 10);
    expect(frequency[0]).toBe(decadePoint(-9, 10));
    expect(frequency.at(-1)).toBe(decadePoint(-1, 10));
  });

  it('leaves the points in a hole of the take empty', () => {
    const dense = (from: number) => Array.from({ length: 11 }, (_, k) => from * 10 ** (k / 50));
    const grid = [...dense(100), ...dense(1000)];
    const { frequency, empty } = toPointsPerDecade(
      spectrum(
        grid,
        grid.map(() => 0),
      ),
      10,
    );
    expect(frequency.map((f) => Math.round(f))).toEqual([100, 126, 158, 1000, 1259, 1585]);
    expect(empty).toBe(7);
  });

  it('makes nothing of nothing; of one reading only the point that it stands on', () => {
    expect(toPointsPerDecade(NOTHING, 10)).toMatchObject({ frequency: [], empty: 0 });
    expect(toPointsPerDecade(spectrum([1001], [-7]), 10)).toMatchObject({ frequency: [] });
    expect(toPointsPerDecade(spectrum([1000], [-7]), 10)).toMatchObject({ frequency: [1000], level: [-7] });
  });
});
