import { describe, expect, it } from 'vitest';
import { hertz } from '../../src/quantity/frequency.ts';
import { InputError } from '../../src/quantity/input-fault.ts';
import type { Readings } from '../../src/readings/readings.ts';
import { gatherTakes } from '../../src/takes/gather-takes.ts';
import type { Grid } from '../../src/takes/take-set.ts';
import { readingsMade, type TakeRows } from './readings-made.ts';

const AS_MEASURED: Grid = { kind: 'as measured' };
const gather = (takes: readonly TakeRows[], grid: Grid = AS_MEASURED, band?: readonly [number, number]) =>
  gatherTakes(readingsMade(takes), {
    grid,
    band: band && { from: hertz(band[0]), to: hertz(band[1]) },
  });

describe('gathering takes as measured', () => {
  it('puts rows in any order on one ascending grid, with NaN where a take has no reading', () => {
    const set = gather([
      {
        rows: [
          [2000, -2],
          [1000, -1],
        ],
      },
      {
        receiver: 'C',
        rows: [
          [3000, -3],
          [2000, -4],
        ],
      },
    ]);
    expect([...set.frequencies]).toEqual([1000, 2000, 3000]);
    expect([...set.levels]).toEqual([-1, -2, Number.NaN, Number.NaN, -4, -3]);
    expect(set.takes.map((take) => take.id)).toEqual(['T001', 'T002']);
    expect(set.uncertainty).toBeUndefined();
  });

  it('carries the uncertainty of each reading, NaN where a row gives none', () => {
    const set = gather([
      {
        rows: [
          [1000, -1, 0.2],
          [2000, -2],
        ],
      },
    ]);
    expect([...set.uncertainty!]).toEqual([0.2, Number.NaN]);
  });

  it('takes frequencies for one and the same that differ by rounding only', () => {
    const set = gather([{ rows: [[16_100, -1]] }, { receiver: 'C', rows: [[16.1 * 1e3, -2]] }]);
    expect(16.1 * 1e3).not.toBe(16_100);
    expect(set.frequencies).toHaveLength(1);
    expect([...set.levels]).toEqual([-1, -2]);
  });

  it('reports every frequency that comes twice in a take, with both lines', () => {
    const twice = () =>
      gather([
        {
          rows: [
            [1000, -1],
            [2000, -2],
            [1000, -3],
          ],
        },
        {
          receiver: 'C',
          rows: [
            [16_100, -1],
            [16.1 * 1e3, -2],
          ],
        },
      ]);
    expect(twice).toThrow(InputError);
    try {
      twice();
    } catch (error) {
      const { faults } = error as InputError;
      expect(faults.map(({ place }) => place.line)).toEqual([4, 6]);
      expect(faults[0]!.found).toContain('A > B (first in line 2)');
    }
  });

  it('says when most frequencies are seen by few takes only', () => {
    const apart = gather([{ rows: [[1000, -1]] }, { receiver: 'C', rows: [[1010, -2]] }]);
    expect(apart.notices.join()).toContain('Only 0 of 2 frequencies');
    const together = gather([{ rows: [[1000, -1]] }, { receiver: 'C', rows: [[1000, -2]] }]);
    expect(together.notices).toEqual([]);
  });

  it('gathers nothing from nothing', () => {
    const set = gather([]);
    expect([set.takes.length, set.frequencies.length, set.levels.length]).toEqual([0, 0, 0]);
  });
});

describe('a chosen band', () => {
  const rows = [1000, 2000, 3000, 4000].map((f) => [f, -f / 1000, 0.1] as const);

  it('keeps both of its ends and says how many readings it leaves out', () => {
    const set = gather([{ rows }], AS_MEASURED, [2000, 3000]);
    expect([...set.frequencies]).toEqual([2000, 3000]);
    expect([...set.uncertainty!]).toEqual([0.1, 0.1]);
    expect(set.notices).toEqual(['2 readings outside 2 kHz to 3 kHz were left out, as --band asks.']);
  });

  it('keeps its ends although kilohertz turn into hertz with rounding', () => {
    const ends = [
      [16_100, -1],
      [32_300, -2],
    ] as const;
    expect([...gather([{ rows: ends }], AS_MEASURED, [16.1 * 1e3, 32.3 * 1e3]).frequencies]).toEqual([16_100, 32_300]);
  });

  it('that holds no reading is an input fault', () => {
    expect(() => gather([{ rows }], AS_MEASURED, [5000, 6000])).toThrow(/no reading from 5 kHz to 6 kHz/);
  });

  it('leaves a take that it empties among the takes', () => {
    const set = gather([{ rows }, { receiver: 'C', rows: [[9000, -1]] }], AS_MEASURED, [1000, 4000]);
    expect(set.takes.map((take) => take.receiver)).toEqual(['B', 'C']);
    expect([...set.levels.slice(4)].every(Number.isNaN)).toBe(true);
  });
});

describe('columns that change nothing yet', () => {
  const given = (more: Partial<Readings>, grid: Grid = AS_MEASURED) => {
    const rows = Array.from({ length: 100 }, (_, k) => [800 + 5 * k, -20] as const);
    return gatherTakes({ ...readingsMade([{ rows }]), ...more }, { grid, band: undefined }).notices;
  };
  const values = Float64Array.from({ length: 100 }, (_, k) => (k < 30 ? 0.9 : Number.NaN));
  const saying = [
    'noise_db is given for 30 of 100 readings and not used: no background noise is taken off a level.',
    'averages is given for 30 of 100 readings and not used: no uncertainty is made of it.',
    'coherence is given for 30 of 100 readings and not used: no uncertainty is made of it.',
  ];

  it('are named in one notice each, on every grid', () => {
    const all = { noise: values, averages: values, coherence: values };
    expect(given(all)).toEqual(saying);
    expect(given(all, { kind: 'octave bands', fraction: 3 })).toEqual(saying);
    expect(given({ noise: values })).toEqual(saying.slice(0, 1));
  });

  it('are not named where nothing is in them', () => {
    expect(given({})).toEqual([]);
    expect(given({ noise: new Float64Array(100).fill(Number.NaN) })).toEqual([]);
  });
});

describe('another grid', () => {
  const sweep = (from: number, to: number, step: number, level: number): TakeRows['rows'] =>
    Array.from({ length: (to - from) / step + 1 }, (_, k) => [from + k * step, level, 0.3] as const);

  it('brings takes with different frequencies together', () => {
    const set = gather([{ rows: sweep(800, 1300, 10, -20) }, { receiver: 'C', rows: sweep(805, 1295, 7, -30) }], {
      kind: 'octave bands',
      fraction: 3,
    });
    expect(set.frequencies).toHaveLength(1);
    expect(set.frequencies[0]).toBe(1000);
    expect(set.levels[0]).toBeCloseTo(-20, 12);
    expect(set.levels[1]).toBeCloseTo(-30, 12);
    expect(set.unused.map(({ value }) => value)).toEqual([
      'take T001, 2 points of the grid',
      'take T002, 2 points of the grid',
    ]);
  });

  it('that no take fills is an input fault', () => {
    expect(() => gather([{ rows: [[1000, -1]] }], { kind: 'octave bands', fraction: 3 })).toThrow(
      /fills a single point/,
    );
    expect(() => gather([{ rows: [[1001, -1]] }], { kind: 'per decade', points: 10 })).toThrow(InputError);
  });
});
