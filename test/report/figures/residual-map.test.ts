import { describe, expect, it } from 'vitest';
import { MOST_COLUMNS, MOST_ROWS, residualCells, spans } from '../../../src/report/figures/residual-cells.ts';
import { residualMap } from '../../../src/report/figures/residual-map.ts';
import { residualSteps, stepOf } from '../../../src/report/figures/residual-steps.ts';
import type { Result } from '../../../src/report/result.ts';
import { resultOf, SHIFTED } from '../example-results.ts';

/** The example blown up to many takes and frequencies, with residuals put in their place. */
async function largeResult(takes: number, width: number, residual: (t: number, f: number) => number): Promise<Result> {
  const result = await resultOf(SHIFTED);
  const [take] = result.set.takes;
  const cells = (of: (t: number, f: number) => number) =>
    Float64Array.from({ length: takes * width }, (_, cell) => of(Math.floor(cell / width), cell % width));
  return {
    ...result,
    set: {
      ...result.set,
      takes: Array.from({ length: takes }, (_, t) => ({ ...take!, id: `T${t + 1}` })),
      frequencies: Float64Array.from({ length: width }, (_, f) => 1000 * 1.01 ** f),
    },
    solution: {
      ...result.solution,
      residuals: cells(residual),
      readingUncertainty: { ...result.solution.readingUncertainty, values: cells(() => 0.1) },
    },
  };
}

describe('cells of the residual map', () => {
  it('are the readings themselves where there are few', async () => {
    const result = await resultOf(SHIFTED);
    const { rows, columns, residual } = residualCells(result);
    expect([rows.length, columns.length]).toEqual([result.set.takes.length, 2]);
    expect([...residual]).toEqual([...result.solution.residuals]);
  });

  it('hold the reading farthest from 0 where there are many, and say which it is', async () => {
    const [takes, width] = [1560, 1000];
    const result = await largeResult(takes, width, (t, f) => (t === 777 && f === 333 ? -9 : 0.01 * ((t + f) % 3)));
    const cells = residualCells(result);
    expect(cells.rows.length).toBeLessThanOrEqual(MOST_ROWS);
    expect(cells.columns.length).toBeLessThanOrEqual(MOST_COLUMNS);
    const worst = cells.residual.indexOf(-9);
    expect(worst).toBeGreaterThanOrEqual(0);
    expect([cells.take[worst], cells.frequency[worst]]).toEqual([777, 333]);
  });

  it('cover everything once', () => {
    for (const [count, most] of [
      [1, 240],
      [240, 240],
      [241, 240],
      [1560, 240],
    ] as const) {
      const parts = spans(count, most);
      expect(parts[0]!.start).toBe(0);
      expect(parts.at(-1)!.end).toBe(count);
      for (const [k, { start, end }] of parts.entries()) {
        expect(end).toBeGreaterThan(start);
        if (k > 0) expect(start).toBe(parts[k - 1]!.end);
      }
    }
  });
});

describe('the residual map', () => {
  it('joins neighbours of one colour into one stroke, so that it stays small', async () => {
    const calm = residualMap(await largeResult(100, 200, () => 3));
    const { content } = calm.drawing.kind === 'plot' ? calm.drawing : { content: '' };
    expect(content.match(/<path/g)).toHaveLength(1);
    expect(content.match(/M/g)).toHaveLength(100);
  });

  it('says when cells hold several readings', async () => {
    const large = residualMap(await largeResult(500, 300, () => 0.1));
    expect(large.notes.join(' ')).toContain('500 takes in 240 rows and 300 frequencies in 240 columns');
    const small = residualMap(await resultOf(SHIFTED));
    expect(small.notes.join(' ')).not.toContain('rows');
  });
});

describe('steps of its colours', () => {
  it('are 1, 2, 5 and 10 times a 1-2-5 number near the scatter that is left', () => {
    expect(residualSteps(0.42)).toEqual([0.5, 1, 2.5, 5]);
    expect(residualSteps(0.1)).toEqual([0.1, 0.2, 0.5, 1]);
    expect(residualSteps(Number.NaN)).toEqual([1, 2, 5, 10]);
    // √(2 ln 28) = 2.58: the largest of 28 readings is no sign of a fault at 0.26 dB.
    expect(residualSteps(0.26, 28)).toEqual([0.5, 1, 2.5, 5]);
  });

  it('are the same on both sides of 0', () => {
    const steps = residualSteps(0.42);
    for (const [residual, step] of [
      [0, -1],
      [0.49, -1],
      [0.5, 0],
      [1.2, 1],
      [3, 2],
      [50, 3],
      [Number.NaN, -1],
    ] as const) {
      expect(stepOf(residual, steps)).toBe(step);
      expect(stepOf(-residual, steps)).toBe(step);
    }
  });
});
