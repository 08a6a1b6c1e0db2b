import { describe, expect, it } from 'vitest';
import { hertz } from '../../src/quantity/frequency.ts';
import { bandHolding, bandsHolding, midBand, nominalMidBand, octaveBand } from '../../src/quantity/octave-bands.ts';

// Source: IEC 61260-1:2014, equations 1 to 5 and annex E: fraction, x, lower edge, mid-band, upper edge, nominal.
const PUBLISHED: readonly (readonly [number, number, number, number, number, number])[] = [
  [1, -5, 22.3872, 31.6228, 44.6684, 31.5],
  [1, -4, 44.6684, 63.0957, 89.1251, 63],
  [1, -3, 89.1251, 125.8925, 177.8279, 125],
  [1, -1, 354.8134, 501.1872, 707.9458, 500],
  [1, 0, 707.9458, 1000, 1412.5375, 1000],
  [1, 4, 11220.1845, 15848.9319, 22387.2114, 16000],
  [3, -16, 22.3872, 25.1189, 28.1838, 25],
  [3, -15, 28.1838, 31.6228, 35.4813, 31.5],
  [3, -10, 89.1251, 100, 112.2018, 100],
  [3, -9, 112.2018, 125.8925, 141.2538, 125],
  [3, -2, 562.3413, 630.9573, 707.9458, 630],
  [3, -1, 707.9458, 794.3282, 891.2509, 800],
  [3, 0, 891.2509, 1000, 1122.0185, 1000],
  [3, 1, 1122.0185, 1258.9254, 1412.5375, 1250],
  [3, 2, 1412.5375, 1584.8932, 1778.2794, 1600],
  [3, 13, 17782.7941, 19952.6231, 22387.2114, 20000],
  [6, -1, 891.2509, 944.0609, 1000, 940],
  [6, 0, 1000, 1059.2537, 1122.0185, 1060],
  [6, 1, 1122.0185, 1188.5022, 1258.9254, 1190],
];
/** Half of the last of the four decimals in print. */
const HALF_A_DIGIT = 0.5000001e-4;
/** The formulas hold to this, relative: a power of at most five decades, rounded. */
const FORMULA = 1e-13;

describe('fractional-octave bands', () => {
  it.each(PUBLISHED)('1/%d octave, band %d: edges, mid-band and nominal frequency as published', (...row) => {
    const [fraction, x, lower, mid, upper, nominal] = row;
    const band = octaveBand(x, fraction);
    expect(Math.abs(band.from - lower)).toBeLessThan(HALF_A_DIGIT);
    expect(Math.abs(band.mid - mid)).toBeLessThan(HALF_A_DIGIT);
    expect(Math.abs(band.to - upper)).toBeLessThan(HALF_A_DIGIT);
    expect(nominalMidBand(x, fraction)).toBe(nominal);
  });

  it.each([1, 3, 6, 12, 24])('1/%d octave: edges lie half a band below and above the mid-band', (fraction) => {
    for (let x = -40; x <= 40; x++) {
      const { from, mid, to } = octaveBand(x, fraction);
      const half = 10 ** (0.3 / (2 * fraction));
      expect(Math.abs((from * half) / mid - 1)).toBeLessThan(FORMULA);
      expect(Math.abs(to / (mid * half) - 1)).toBeLessThan(FORMULA);
    }
  });

  it.each([1, 3, 6, 12, 24])('1/%d octave: neighbours share their edge to the last bit', (fraction) => {
    for (let x = -60; x <= 60; x++) expect(octaveBand(x, fraction).to).toBe(octaveBand(x + 1, fraction).from);
  });

  it.each([1, 3, 6, 12, 24])(
    '1/%d octave: a frequency on an edge belongs to the upper band, a mid-band to its own',
    (n) => {
      for (let x = -60; x <= 60; x++) {
        expect(bandHolding(octaveBand(x, n).from, n).index).toBe(x);
        expect(bandHolding(midBand(x, n), n).index).toBe(x);
        expect(bandHolding(hertz(octaveBand(x, n).to * (1 - 1e-15)), n).index).toBe(x);
      }
    },
  );

  // Source: IEC 61260-1:2014 annex E and ISO 266.
  it('labels third-octaves from 25 Hz to 20 kHz with the nominal series', () => {
    const series = Array.from({ length: 30 }, (_, k) => nominalMidBand(k - 16, 3) as number);
    expect(series).toEqual([
      25, 31.5, 40, 50, 63, 80, 100, 125, 160, 200, 250, 315, 400, 500, 630, 800, 1000, 1250, 1600, 2000, 2500, 3150,
      4000, 5000, 6300, 8000, 10_000, 12_500, 16_000, 20_000,
    ]);
  });

  it('lists the bands that hold a frequency once each, ascending, and none between them', () => {
    const bands = bandsHolding([4000, 1000, 1010, 100], 3);
    expect(bands.map((band) => nominalMidBand(band.index, 3))).toEqual([100, 1000, 4000]);
    expect(bandsHolding([], 3)).toEqual([]);
  });
});
