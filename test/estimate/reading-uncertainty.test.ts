import { describe, expect, it } from 'vitest';
import { readingUncertainty } from '../../src/estimate/reading-uncertainty.ts';
import { repeatScatter } from '../../src/estimate/repeat-scatter.ts';
import { solve } from '../../src/estimate/solve.ts';
import { thirdOctaves } from '../../src/estimate/third-octaves.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { InputError } from '../../src/quantity/input-fault.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const NONE = Number.NaN;
const repeats = (...levels: readonly (readonly number[])[]): TakeLine[] =>
  levels.map((own, k) => ({ emitter: 'A', receiver: 'B', repeat: `${k + 1}`, levels: own }));

describe('scatter of repeats', () => {
  it('is the standard deviation about each group’s own mean, pooled', () => {
    const set = takeSetOf(
      [1000],
      [...repeats([-30], [-32]), ...repeats([-10], [-11], [-12]).map((line) => ({ ...line, receiver: 'C' }))],
    );
    // Squares 2 and 2 on 1 and 2 degrees of freedom.
    const [band] = repeatScatter(set);
    expect(band!.standardDeviation).toBeCloseTo(Math.sqrt(4 / 3), 12);
    expect(band!.dof).toBe(3);
  });

  it('is kept apart by third-octave band; a band without repeats has none', () => {
    const bands = repeatScatter(takeSetOf([1000, 4000], repeats([-30, -30], [-32, NONE])));
    expect(bands.map(({ standardDeviation }) => standardDeviation)).toEqual([Math.SQRT2, NONE]);
    expect(bands.map(({ dof }) => dof)).toEqual([1, 0]);
  });

  it('that is the same at all frequencies of a band is worth one frequency, not less', () => {
    const frequencies = Array.from({ length: 20 }, (_, k) => 950 + 5 * k);
    const flat = (level: number) => frequencies.map(() => level);
    const [band] = repeatScatter(takeSetOf(frequencies, repeats(flat(0), flat(1), flat(5))));
    // 2 degrees of freedom at each frequency, all the same.
    expect(band!.dof).toBeGreaterThanOrEqual(2);
    expect(band!.dof).toBeLessThan(2.1);
  });

  it('of takes without repeats is nothing', () => {
    expect(repeatScatter(takeSetOf([1000], pairsOf({ 'A>B': 0, 'B>A': 0 })))).toEqual([]);
  });
});

describe('where the uncertainty of a reading comes from', () => {
  it('the input’s own column comes first, then repeats, then the figure given', () => {
    const twice = repeats([-30], [-32]);
    const column = readingUncertainty(
      takeSetOf(
        [1000],
        twice.map((line) => ({ ...line, u: 0.4 })),
      ),
      0.7,
    )!;
    expect([column.source, ...column.values]).toEqual(['column', 0.4, 0.4]);
    const fromRepeats = readingUncertainty(takeSetOf([1000], twice), 0.7)!;
    expect([fromRepeats.source, ...fromRepeats.values]).toEqual(['repeats', Math.SQRT2, Math.SQRT2]);
    expect([...fromRepeats.dof]).toEqual([1]);
    const given = readingUncertainty(takeSetOf([1000], pairsOf({ 'A>B': 0 })), 0.7)!;
    expect([given.source, ...given.values, ...given.dof]).toEqual(['given', 0.7, Number.POSITIVE_INFINITY]);
    expect(readingUncertainty(takeSetOf([1000], pairsOf({ 'A>B': 0 })), undefined)).toBeUndefined();
  });

  it('repeats that agree to the last digit say nothing', () => {
    expect(readingUncertainty(takeSetOf([1000], repeats([-30], [-30])), undefined)).toBeUndefined();
  });

  it('readings without an own one take that of the repeats or the figure given, and the statement counts them', () => {
    const lines = [
      { emitter: 'A', receiver: 'B', levels: [-30], u: 0.4 },
      { emitter: 'A', receiver: 'C', levels: [-30] },
    ];
    const { values, statement } = readingUncertainty(takeSetOf([1000], lines), 0.7)!;
    expect([...values]).toEqual([0.4, 0.7]);
    expect(statement).toContain('1 readings without one have the figure given');
  });

  it('some readings with an uncertainty and some with none from any source is an input fault with its place', () => {
    const lines = [
      { emitter: 'A', receiver: 'B', levels: [-30], u: 0.4 },
      { emitter: 'A', receiver: 'C', levels: [-30] },
    ];
    expect(() => readingUncertainty(takeSetOf([1000], lines), undefined)).toThrow(InputError);
    expect(() => readingUncertainty(takeSetOf([1000], lines), undefined)).toThrow(/bench.csv:3 u_db: found 1 readings/);
  });

  it('what was not measured has none', () => {
    const { values } = readingUncertainty(
      takeSetOf([1000, 2000], [{ emitter: 'A', receiver: 'B', levels: [0, NONE] }]),
      1,
    )!;
    expect([...values]).toEqual([1, NONE]);
  });
});

describe('scatter of residuals', () => {
  const solved = async (frequencies: readonly number[], lines: readonly TakeLine[]) => {
    const set = takeSetOf(frequencies, lines);
    return solve(set, buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' }));
  };
  /** A>A twice: residuals ± half the difference, redundancy 1/2 each. Not repeats, as the sessions differ. */
  const twice = (...pairs: readonly (readonly [number, number])[]): TakeLine[] => [
    { emitter: 'A', receiver: 'A', session: '1', levels: pairs.map(([one]) => one) },
    { emitter: 'A', receiver: 'A', session: '2', levels: pairs.map(([, two]) => two) },
  ];

  it('is √(Σ residual² / Σ redundancy), pooled over a third-octave band and apart for others', async () => {
    const { readingUncertainty: reading, uncertainty } = await solved(
      [1000, 1010, 4000],
      twice([0, 2], [4, 0], [0, 1]),
    );
    // Squares 2 and 8 on 1 degree each; 1/2 on 1.
    expect(reading.bands).toHaveLength(2);
    expect(reading.bands[0]!.standardDeviation).toBeCloseTo(Math.sqrt(5), 12);
    expect(reading.bands[1]!.standardDeviation).toBeCloseTo(Math.sqrt(0.5), 12);
    // The mean of two, halved: s / √2 / 2.
    expect(uncertainty[0]).toBeCloseTo(Math.sqrt(5) / Math.SQRT2 / 2, 12);
    expect(uncertainty[2]).toBeCloseTo(0.25, 12);
  });

  it('has as many degrees of freedom as there are independent frequencies, and at least those of one', async () => {
    const frequencies = Array.from({ length: 10 }, (_, k) => 950 + 10 * k);
    const same = await solved(frequencies, twice(...frequencies.map((): [number, number] => [0, 2])));
    expect(same.dof[0]).toBeGreaterThanOrEqual(1);
    expect(same.dof[0]).toBeLessThan(1.05);
    const changing = await solved(
      frequencies,
      twice(...frequencies.map((_, k): [number, number] => [0, k % 2 ? 2 : -2])),
    );
    expect(changing.dof[0]).toBeCloseTo(10, 9);
  });

  it('that is only rounding is no uncertainty', async () => {
    const { readingUncertainty: reading } = await solved([1000], twice([-40.2, -40.2]));
    expect(reading.source).toBe('none');
  });
});

describe('third-octaves of a grid', () => {
  it('name the band of every frequency, and only bands that hold one', () => {
    const { bands, bandOf } = thirdOctaves(Float64Array.of(1000, 1100, 4000));
    expect(bands.map((band) => band.index)).toEqual([0, 6]);
    expect([...bandOf]).toEqual([0, 0, 1]);
  });
});
