import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { curvePath, ribbonPath, thinned } from '../../../src/report/figures/curve.ts';
import { spread } from '../../../src/report/figures/end-labels.ts';

const pointsOf = (y: readonly number[]) => ({
  x: Float64Array.from(y, (_, k) => (100 * k) / y.length),
  y: Float64Array.from(y),
});

describe('a thinned curve', () => {
  it('keeps the highest and the lowest value of every column, in their order', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: -50, max: 50, noNaN: true }), { minLength: 50, maxLength: 400 }), (y) => {
        const columns = 10;
        const { x: at, y: kept } = thinned(pointsOf(y), 100, columns);
        if (y.length > 2 * columns) expect(kept.length).toBeLessThanOrEqual(2 * columns);
        expect([...at]).toEqual([...at].sort((a, b) => a - b));
        for (let column = 0; column < columns; column++) {
          const isIn = (_: unknown, k: number) => Math.floor((k / y.length) * columns) === column;
          const own = y.filter(isIn);
          for (const extreme of [Math.max(...own), Math.min(...own)]) expect([...kept]).toContain(extreme);
        }
      }),
      { seed: 1, numRuns: 60 },
    );
  });

  it('is left alone where there are few points, and keeps a gap that fills a column', () => {
    const few = pointsOf([1, 2, 3]);
    expect(thinned(few, 100, 10)).toBe(few);
    const gap = Array.from({ length: 100 }, (_, k) => (k >= 50 && k < 60 ? Number.NaN : k));
    const { y } = thinned(pointsOf(gap), 100, 10);
    expect(y.filter((value) => Number.isNaN(value)).length).toBe(1);
  });
});

describe('paths', () => {
  it('are broken where a value is missing, and show a lone value as a dot', () => {
    const x = Float64Array.of(0, 10, 20, 30);
    expect(curvePath({ x, y: Float64Array.of(1, 2, Number.NaN, 4) })).toBe('M0,1L10,2M30,4Z');
  });

  it('leave out the middle of a level stretch and nothing else', () => {
    const x = Float64Array.of(0, 10, 20, 30, 40);
    expect(curvePath({ x, y: Float64Array.of(1, 1, 1, 1, 2) })).toBe('M0,1L30,1L40,2');
  });

  it('of a ribbon that is thinned reach from the lowest to the highest edge', () => {
    const count = 100;
    const x = Float64Array.from({ length: count }, (_, k) => k);
    const low = Float64Array.from(x, (k) => (k === 33 ? 90 : 50));
    const high = Float64Array.from(x, (k) => (k === 66 ? 1 : 40));
    const path = ribbonPath(x, low, high, { width: 100, columns: 10 });
    expect(path).toContain(',90');
    expect(path).toContain(',1L');
  });
});

describe('labels at the ends of curves', () => {
  it('keep their order, their distance and their bounds', () => {
    fc.assert(
      fc.property(fc.array(fc.double({ min: 0, max: 400, noNaN: true }), { minLength: 1, maxLength: 30 }), (places) => {
        const sorted = [...places].sort((a, b) => a - b);
        const moved = spread(sorted, 12.5, [4, 398]);
        expect(moved.length).toBe(sorted.length);
        for (let k = 1; k < moved.length; k++) {
          // Sums of multiples of the distance: a few last bits of 400.
          expect(moved[k]! - moved[k - 1]!).toBeGreaterThan(12.5 - 1e-9);
        }
        expect(moved.at(-1)!).toBeLessThanOrEqual(398);
        expect(moved[0]!).toBeGreaterThanOrEqual(4 - 1e-9);
      }),
      { seed: 2, numRuns: 200 },
    );
  });

  it('stay where they are when nothing is in their way', () => {
    expect(spread([50, 100, 300], 12.5, [4, 398])).toEqual([50, 100, 300]);
    expect(spread([], 12.5, [4, 398])).toEqual([]);
  });
});
