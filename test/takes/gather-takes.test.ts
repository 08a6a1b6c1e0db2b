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

describe('background noise', () => {
  const rows = [
    [1000, -20],
    [2000, -20],
    [3000, -20],
    [4000, -20],
  ] as const;
  const noise = Float64Array.of(-26, -22.5, -10, Number.NaN);
  const gathered = (more: Partial<Readings>, grid: Grid = AS_MEASURED) =>
    gatherTakes({ ...readingsMade([{ rows }]), noise, ...more }, { grid, band: undefined });

  it('is taken off the level; a reading too close to it is unused, with line, value and reason', () => {
    const set = gathered({});
    expect([...set.frequencies]).toEqual([1000, 4000]);
    expect(set.levels[0]).toBeCloseTo(-21.256276, 6);
    expect(set.levels[1]).toBe(-20);
    expect(set.unused).toEqual([
      {
        file: 'bench.csv',
        line: 3,
        column: 'noise_db',
        value: '-22.5',
        reason: 'background noise only 2.5 dB below the level: under 3 dB, too little is left to subtract it',
      },
      {
        file: 'bench.csv',
        line: 4,
        column: 'noise_db',
        value: '-10',
        reason: 'background noise at or above the level: the level is that of the noise',
      },
    ]);
    expect(set.notices).toContain('Background noise (noise_db) was subtracted from 1 of 4 readings, at most 1.3 dB.');
  });

  it('makes the uncertainty of a reading grow, on every grid', () => {
    const uncertainty = Float64Array.of(0.1, 0.1, 0.1, 0.1);
    // At 6 dB: √(1.335450² + 0.335450²).
    const grown = Math.hypot(1.33545, 0.33545);
    expect(gathered({ uncertainty }).uncertainty![0]).toBeCloseTo(0.1 * grown, 6);
    const points = gathered({ uncertainty }, { kind: 'per decade', points: 1 });
    expect(points.uncertainty![0]).toBeCloseTo(0.1 * grown, 6);
    expect(points.noiseFactor![0]).toBeCloseTo(grown, 6);
  });

  it('above every reading is an input fault', () => {
    expect(() => gathered({ noise: new Float64Array(4).fill(0) })).toThrow(/no reading that stands 3 dB above/);
  });
});

describe('averages and coherence', () => {
  const rows = [
    [1000, -20],
    [2000, -20],
    [3000, -20],
  ] as const;
  const gathered = (more: Partial<Readings>) =>
    gatherTakes({ ...readingsMade([{ rows }]), ...more }, { grid: AS_MEASURED, band: undefined });
  const NONE = Number.NaN;

  it('give a reading its uncertainty where it has no u_db; a power spectrum is freed of its bias', () => {
    const set = gathered({
      averages: Float64Array.of(100, 100, 100),
      coherence: Float64Array.of(NONE, 0.9, 0.9),
      uncertainty: Float64Array.of(NONE, NONE, 0.3),
    });
    expect(set.uncertaintyOrigin).toBe('both');
    expect(set.uncertainty![0]).toBeCloseTo(0.4353825, 6);
    expect(set.uncertainty![1]).toBeCloseTo(0.2047284, 6);
    expect(set.uncertainty![2]).toBe(0.3);
    // ψ(100) − ln 100 = −1/200 − 1/120000 (NIST Digital Library of Mathematical Functions, 5.11.2), to 1e-9.
    expect(set.levels[0]).toBeCloseTo(-20 + (10 / Math.LN10) * (1 / 200 + 1 / 120_000), 7);
    expect([...set.levels.slice(1)]).toEqual([-20, -20]);
    expect(set.notices).toHaveLength(3);
  });

  it('that tell nothing are named: a coherence of 1, a coherence without averages', () => {
    const set = gathered({ averages: Float64Array.of(8, NONE, NONE), coherence: Float64Array.of(1, 0.9, NONE) });
    expect(set.uncertainty).toBeUndefined();
    expect(set.notices.map((notice) => notice.slice(0, 22))).toEqual([
      'coherence is 1 for 1 o',
      'coherence is given for',
    ]);
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
