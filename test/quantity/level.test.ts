import { describe, expect, it } from 'vitest';
import { DECIBEL_PER_NEPER, decibel, levelOfRatio, powerMean, ratioOfLevel } from '../../src/quantity/level.ts';

const levels = (...values: number[]) => values.map(decibel);

describe('levels', () => {
  // Source: 20 / ln 10; the further figures are derived from it.
  it('turns a small relative uncertainty into decibels by 20 / ln 10', () => {
    expect(DECIBEL_PER_NEPER).toBeCloseTo(8.685889638, 9);
    expect(0.01 * DECIBEL_PER_NEPER).toBeCloseTo(0.0868589, 7);
    expect(0.05 * DECIBEL_PER_NEPER).toBeCloseTo(43.42945 / 100, 7);
    expect(0.1 * DECIBEL_PER_NEPER).toBeCloseTo(0.868589, 7);
    expect((0.1 / DECIBEL_PER_NEPER) * 100).toBeCloseTo(1.1512925, 7);
  });

  it('gives the exact levels of a ratio 10 % up and 10 % down, and the ratio of 0.1 dB', () => {
    expect(levelOfRatio(1.1)).toBeCloseTo(0.8278537, 7);
    expect(levelOfRatio(0.9)).toBeCloseTo(-0.9151498, 7);
    expect((ratioOfLevel(decibel(0.1)) - 1) * 100).toBeCloseTo(1.1579454, 7);
  });

  it.each([0, -0, -1, Number.NaN])('has no level for the amplitude ratio %d', (ratio) => {
    expect(() => levelOfRatio(ratio)).toThrow(RangeError);
  });

  it('averages power: 60 and 66 dB give 63.962928 dB, not 63 (levels) nor 63.508097 (amplitudes)', () => {
    expect(powerMean(levels(60, 66))).toBeCloseTo(63.962928, 6);
  });

  it('leaves a single level and equal levels as they are, however low or high', () => {
    expect(powerMean(levels(-4000))).toBe(-4000);
    expect(powerMean(levels(7000, 7000, 7000))).toBe(7000);
  });

  it('refuses the mean of no levels', () => {
    expect(() => powerMean([])).toThrow(RangeError);
  });
});
