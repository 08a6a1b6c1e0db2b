import { describe, expect, it } from 'vitest';
import { frequencyTable } from '../../src/takes/frequency-table.ts';
import { repeatGroups } from '../../src/takes/repeats.ts';
import { takeSpectra } from '../../src/takes/take-spectra.ts';
import { takeSetOf } from '../take-set-of.ts';
import { readingsMade } from './readings-made.ts';

const LINE = { emitter: 'A', receiver: 'B', levels: [0] };

describe('repeats', () => {
  it('are takes that differ in nothing but the repeat', () => {
    const set = takeSetOf(
      [1000],
      [
        { ...LINE, repeat: '1' },
        { ...LINE, receiver: 'C' },
        { ...LINE, repeat: '2' },
      ],
    );
    expect(repeatGroups(set)).toEqual([[0, 2]]);
  });

  it.each([
    ['emitter', 'X'],
    ['receiver', 'X'],
    ['path', 'p'],
    ['session', 's'],
    ['emitterMount', 'm'],
    ['receiverMount', 'm'],
    ['emitterSeating', '2'],
    ['receiverSeating', '2'],
  ])('another %s makes it another measurement', (field, value) => {
    expect(repeatGroups(takeSetOf([1000], [LINE, { ...LINE, [field]: value }]))).toEqual([]);
  });

  it('the other direction of a pair is no repeat', () => {
    expect(repeatGroups(takeSetOf([1000], [LINE, { ...LINE, emitter: 'B', receiver: 'A' }]))).toEqual([]);
  });

  it('labels that only run together alike are not confused', () => {
    const set = takeSetOf(
      [1000],
      [
        { ...LINE, emitter: 'A,B', receiver: 'C' },
        { ...LINE, emitter: 'A', receiver: 'B,C' },
      ],
    );
    expect(repeatGroups(set)).toEqual([]);
  });
});

describe('order of readings', () => {
  it('is by take and, within it, by frequency, wherever the rows stand', () => {
    const made = readingsMade([
      {
        rows: [
          [3000, 0],
          [1000, 0],
        ],
      },
      { rows: [] },
      { rows: [[2000, 0]] },
    ]);
    const shuffled = { ...made, take: Int32Array.of(0, 2, 0), frequency: Float64Array.of(3000, 2000, 1000) };
    const { start, order } = takeSpectra(shuffled);
    expect([...start]).toEqual([0, 2, 2, 3]);
    expect([...order]).toEqual([2, 0, 1]);
  });
});

describe('table of frequencies', () => {
  it('is ascending and without repeats, and each value knows its place', () => {
    const { frequencies, indexOf } = frequencyTable(Float64Array.of(30, 10, 20, 10, 30));
    expect([...frequencies]).toEqual([10, 20, 30]);
    expect([...indexOf]).toEqual([2, 0, 1, 0, 2]);
  });

  it('brings together what differs by less than 1e-9 of itself, and no more', () => {
    const { frequencies, indexOf } = frequencyTable(Float64Array.of(1000, 1000 * (1 + 5e-10), 1000 * (1 + 2e-9)));
    expect([...frequencies]).toEqual([1000, 1000 * (1 + 2e-9)]);
    expect([...indexOf]).toEqual([0, 0, 1]);
  });

  it('is empty for no values', () => {
    expect(frequencyTable(new Float64Array(0)).frequencies).toHaveLength(0);
  });
});
