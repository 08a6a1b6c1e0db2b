import { describe, expect, it } from 'vitest';
import { reciprocityFindings } from '../../src/findings/reciprocity-bands.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { testReciprocity } from '../../src/model/reciprocity.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';
import type { SimulationOptions } from '../simulation/simulation-options.ts';
import { pairsOf, takeSetOf } from '../take-set-of.ts';

const judge = (set: TakeSet, model: ModelOptions['model'] = 'reciprocal') =>
  reciprocityFindings(set, buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model }));

const seated = (emitter: string, receiver: string) => ({ emitterSeating: emitter, receiverSeating: receiver });

describe('which takes are compared', () => {
  it('takes of the same seatings with each other: what another mounting says does not count', () => {
    const lines = [
      ...pairsOf({ 'A>B': 10 }, seated('1', '7')),
      ...pairsOf({ 'B>A': 9 }, seated('7', '1')),
      ...pairsOf({ 'A>B': 50 }, seated('2', '8')),
    ];
    const { pairs, differentSeatings, whole } = testReciprocity(takeSetOf([1000], lines));
    expect([pairs, differentSeatings]).toEqual([1, 0]);
    expect(whole.rmsDifference).toBeCloseTo(1, 12);
  });

  it('several seatings in common: their differences are averaged', () => {
    const lines = [
      ...pairsOf({ 'A>B': 10 }, seated('1', '7')),
      ...pairsOf({ 'B>A': 9 }, seated('7', '1')),
      ...pairsOf({ 'A>B': 50 }, seated('2', '8')),
      ...pairsOf({ 'B>A': 47 }, seated('8', '2')),
    ];
    expect(testReciprocity(takeSetOf([1000], lines)).whole.rmsDifference).toBeCloseTo(2, 12);
  });

  it('without a seating in common the means over all are compared, and the pair is counted', () => {
    const lines = [
      ...pairsOf({ 'A>B': 10 }, seated('1', '7')),
      ...pairsOf({ 'A>B': 12 }, seated('2', '8')),
      ...pairsOf({ 'B>A': 9 }, seated('9', '3')),
    ];
    const { pairs, differentSeatings, whole } = testReciprocity(takeSetOf([1000], lines));
    expect([pairs, differentSeatings]).toEqual([1, 1]);
    expect(whole.rmsDifference).toBeCloseTo(2, 12);
  });

  it('without labels a session is a seating, and two sessions are two', () => {
    const both = (session: string) => [
      ...pairsOf({ 'A>B': 10 }, { session: 'mon' }),
      ...pairsOf({ 'B>A': 9 }, { session }),
    ];
    expect(testReciprocity(takeSetOf([1000], both('mon'))).differentSeatings).toBe(0);
    expect(testReciprocity(takeSetOf([1000], both('tue'))).differentSeatings).toBe(1);
  });
});

describe('findings per band', () => {
  const simulate = (options: Partial<SimulationOptions> & { seed: number }) =>
    simulatePairs({
      units: 6,
      bothWays: true,
      repeatScatter: 0.1,
      reseatScatter: 0.5,
      frequencies: logSpaced(60, 10_000, 320_000),
      ...options,
    }).set;

  it('mountings do not hide how units differ between their roles, band by band', () => {
    const { bands, pairs, differentSeatings, speaksAgainstModel } = judge(simulate({ seed: 1, model: 'directional' }));
    expect([pairs, differentSeatings, speaksAgainstModel]).toEqual([15, 0, true]);
    expect(bands.every(({ verdict }) => verdict === 'emit and receive differ')).toBe(true);
    expect(judge(simulate({ seed: 1, model: 'directional' }), 'directional').speaksAgainstModel).toBe(false);
  });

  it('of 100 reciprocal sets at most 5 show a difference in any band', () => {
    let shown = 0;
    for (let seed = 1; seed <= 100; seed++) if (judge(simulate({ seed })).speaksAgainstModel) shown++;
    expect(shown).toBeLessThanOrEqual(5);
  });

  it('no pair both ways: no bands; a tree of pairs: not testable', () => {
    expect(judge(takeSetOf([1000], pairsOf({ 'A>B': 1, 'B>C': 2, 'C>A': 3 })))).toEqual({
      pairs: 0,
      differentSeatings: 0,
      bands: [],
      speaksAgainstModel: false,
    });
    const tree = judge(takeSetOf([1000], pairsOf({ 'A>B': 1, 'B>A': 2, 'B>C': 3, 'C>B': 4 })));
    expect(tree.bands[0]).toMatchObject({ verdict: 'not testable', pValue: Number.NaN });
    expect(tree.bands[0]!.rmsDifference).toBeCloseTo(1, 12);
  });
});
