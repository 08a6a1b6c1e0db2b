import { describe, expect, it } from 'vitest';
import { randomStream } from '../../src/numeric/random.ts';
import { powerSpectrumError, transferFunctionError } from '../../src/takes/spectral-error.ts';

/** J. S. Bendat & A. G. Piersol, Random Data; figures recomputed. */
describe('the random error of an averaged spectrum', () => {
  it('of a transfer function is √((1 − γ²) / (2 n γ²)) of it', () => {
    expect(transferFunctionError(0.9, 100).uncertainty).toBeCloseTo(0.2047284, 7);
    expect(transferFunctionError(0.5, 100).uncertainty).toBeCloseTo(0.6141851, 7);
  });

  it('of a power spectrum tends to 10 lg of 1 ± 1/√n', () => {
    const n = 1e6;
    // ψ′(n) = 1/n + 1/(2 n²) + …, so that the ratio is 1 + 1/(4 n).
    expect(powerSpectrumError(n).uncertainty / (10 / Math.LN10 / Math.sqrt(n))).toBeCloseTo(1 + 1 / (4 * n), 9);
  });

  it.each([1, 2, 8])('with %d averages is that of simulated spectra, in mean and spread', (n) => {
    const stream = randomStream(7, n);
    const trials = 40_000;
    const levels = Float64Array.from({ length: trials }, () => {
      let power = 0;
      for (let k = 0; k < 2 * n; k++) power += stream.normal() ** 2;
      return 10 * Math.log10(power / (2 * n));
    });
    const mean = levels.reduce((sum, level) => sum + level, 0) / trials;
    const spread = Math.sqrt(levels.reduce((sum, level) => sum + (level - mean) ** 2, 0) / (trials - 1));
    const { bias, uncertainty } = powerSpectrumError(n);
    // Four sampling errors of a mean, and of a standard deviation (the distribution has tails: kurtosis below 6).
    expect(Math.abs(mean - bias)).toBeLessThan((4 * uncertainty) / Math.sqrt(trials));
    expect(Math.abs(spread / uncertainty - 1)).toBeLessThan(4 * Math.sqrt(5 / 4 / trials));
  });
});
