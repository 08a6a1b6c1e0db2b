import { describe, expect, it } from 'vitest';
import { solveGains } from '../../src/estimate/solve-gains.ts';

describe('gains shared by all frequencies', () => {
  it('are solved from their normal matrix where it tells them all', () => {
    const { values, covariance, pinned } = solveGains(
      Float64Array.of(2, 1, 1, 3),
      Float64Array.of(3, 4),
      Float64Array.of(2, 3),
    );
    expect([...values].map((value) => Math.round(value * 1e12) / 1e12)).toEqual([1, 1]);
    expect(pinned).toEqual([]);
    // Inverse of [[2, 1], [1, 3]]: [[3, −1], [−1, 2]] / 5.
    [0.6, -0.2, -0.2, 0.4].forEach((entry, k) => {
      expect(covariance[k]).toBeCloseTo(entry, 14);
    });
  });

  it('of which only the difference is seen: the first is 0 dB, and both move with it', () => {
    const { values, covariance, pinned, movements } = solveGains(
      Float64Array.of(4, -4, -4, 4),
      Float64Array.of(-8, 8),
      Float64Array.of(10, 10),
    );
    expect([...values]).toEqual([0, 2]);
    expect(pinned).toEqual([0]);
    expect([...covariance]).toEqual([0, 0, 0, 0.25]);
    expect(movements.map((movement) => [...movement])).toEqual([[1, 1]]);
  });

  it('that nothing sees are all 0 dB, each moving for itself', () => {
    const { values, pinned, movements } = solveGains(new Float64Array(4), new Float64Array(2), Float64Array.of(5, 0));
    expect([...values]).toEqual([0, 0]);
    expect(pinned).toEqual([0, 1]);
    expect(movements.map((movement) => [...movement])).toEqual([
      [1, 0],
      [0, 1],
    ]);
  });

  it('rounding of the eliminated diagonal is not taken for information', () => {
    const { pinned } = solveGains(Float64Array.of(3e-12), Float64Array.of(1e-12), Float64Array.of(1e4));
    expect(pinned).toEqual([0]);
  });

  it('no gains give nothing', () => {
    const none = new Float64Array(0);
    expect(solveGains(none, none, none).values).toHaveLength(0);
  });
});
