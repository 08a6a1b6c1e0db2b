import { describe, expect, it } from 'vitest';
import { noiseCorrection, noiseLevelPart } from '../../src/takes/subtract-noise.ts';

/** ISO 3744:2010, ISO 3741:2010: K1 = −10 lg(1 − 10^(−0.1 D)); values recomputed, printed with six decimals. */
describe('the correction for background noise', () => {
  it.each([
    [3, 3.020624],
    [4, 2.204808],
    [6, 1.256276],
    [7, 0.966529],
    [9, 0.584352],
    [10, 0.457575],
    [15, 0.139554],
  ])('noise %d dB below the level takes %d dB off it', (clearance, expected) => {
    expect(Math.abs(noiseCorrection(clearance).correction - expected)).toBeLessThan(5.1e-7);
  });

  it('is next to nothing far above the noise, and keeps its digits there', () => {
    // −10 lg(1 − x) = 10/ln 10 · x for small x.
    expect(noiseCorrection(150).correction / ((10 / Math.LN10) * 1e-15)).toBeCloseTo(1, 6);
    expect(noiseCorrection(150).factor).toBeCloseTo(1, 12);
  });

  it.each([3, 6, 10, 20])('at %d dB multiplies u by what both levels move it, found by moving them', (clearance) => {
    const corrected = (level: number, noise: number) => level - noiseCorrection(level - noise).correction;
    const step = 1e-5;
    const slope = (dL: number, dN: number) =>
      (corrected(clearance + dL, dN) - corrected(clearance - dL, -dN)) / (2 * step);
    const { factor } = noiseCorrection(clearance);
    // Central differences: error of the order step².
    expect(Math.abs(factor - Math.hypot(slope(step, 0), slope(0, step)))).toBeLessThan(1e-8);
    expect(Math.abs(noiseLevelPart(factor) + slope(0, step))).toBeLessThan(1e-8);
  });

  /** The same source: the corrected level moves by 1.335450 dB per dB of the level at 6 dB, by 1.111111 at 10 dB. */
  it('moves the level by the leverage that the source gives', () => {
    const leverage = (clearance: number) => 1 + noiseLevelPart(noiseCorrection(clearance).factor);
    expect(leverage(6)).toBeCloseTo(1.33545, 6);
    expect(leverage(10)).toBeCloseTo(10 / 9, 12);
  });
});
