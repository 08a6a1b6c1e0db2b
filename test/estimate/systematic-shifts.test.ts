import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { solve } from '../../src/estimate/solve.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { systematicEffects } from '../../src/model/systematic-effects.ts';
import type { BudgetLine } from '../../src/readings/budget-lines.ts';
import { randomBench } from '../properties/random-bench.ts';
import { pairsOf, takeSetOf } from '../take-set-of.ts';

const line = (more: Partial<BudgetLine>): BudgetLine => ({
  name: 'effect',
  place: { file: 'budget.csv', line: 2 },
  uncertainty: 0.02,
  distribution: 'normal',
  dof: Number.POSITIVE_INFINITY,
  type: 'B',
  target: 'all',
  label: '',
  from: 0,
  to: Number.POSITIVE_INFINITY,
  ...more,
});

const triangle = takeSetOf([1000], pairsOf({ 'A>B': -41.37, 'A>C': -38.92, 'B>C': -44.05 }, { u: 0.05 }));
const reciprocal = buildModel(triangle, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
const solved = (lines: readonly BudgetLine[]) =>
  solve(triangle, reciprocal, { effects: systematicEffects(triangle, lines) });

describe('systematic effects', () => {
  /** Three-transducer reciprocity: an offset common to all levels enters each response by half, fully correlated; by hand. */
  it('common to all takes enter every response by half, and drop out of differences', async () => {
    const { uncertainty, covariance, estimates } = await solved([line({})]);
    for (const u of uncertainty) expect(u).toBeCloseTo(Math.sqrt(3 * 0.05 ** 2 + 0.02 ** 2) / 2, 12);
    const { scales, matrix, common } = covariance[0]!;
    const entry = (i: number, j: number) => scales[0]! * matrix[i * 3 + j]! + common![i * 3 + j]!;
    // Equal u: var(H_A − H_B) = 2 u².
    expect(entry(0, 0) + entry(1, 1) - 2 * entry(0, 1)).toBeCloseTo(2 * 0.05 ** 2, 12);
    expect([...estimates]).toEqual([...(await solved([])).estimates]);
  });

  it('of one unit enter its own response as a whole, and no other', async () => {
    const { uncertainty } = await solved([line({ target: 'unit', label: 'B' })]);
    const own = (Math.sqrt(3) / 2) * 0.05;
    [own, Math.hypot(own, 0.02), own].forEach((u, k) => {
      expect(uncertainty[k]).toBeCloseTo(u, 12);
    });
  });

  /** Welch–Satterthwaite by hand, the readings counting as known: ν = 9 (u⁴ / u_effect⁴). */
  it('with few degrees of freedom limit those of the response', async () => {
    const { uncertainty, dof } = await solved([line({ target: 'unit', label: 'B', uncertainty: 0.1, dof: 9 })]);
    expect(dof[1]).toBeCloseTo((9 * uncertainty[1]! ** 4) / 0.1 ** 4, 9);
    expect(dof[0]).toBe(Number.POSITIVE_INFINITY);
  });

  it('outside their range change nothing', async () => {
    const { uncertainty } = await solved([line({ from: 1001 })]);
    expect([...uncertainty]).toEqual([...(await solved([])).uncertainty]);
  });

  it('on units, sessions and paths that no take names are input faults, told together', () => {
    const wrong = [
      line({ target: 'unit', label: 'Z' }),
      line({ name: 'b', target: 'session', label: 'night' }),
      line({ name: 'c', target: 'path', label: 'water' }),
    ];
    expect(() => systematicEffects(triangle, wrong)).toThrow(
      expect.objectContaining({
        faults: [
          expect.objectContaining({ found: 'the unit Z, which no take names' }),
          expect.objectContaining({ found: 'the session night, which no take names' }),
          expect.objectContaining({ found: 'the path water, which no take names' }),
        ],
      }),
    );
  });
});

/** Rounding of two solutions that are subtracted: levels up to 60 dB, 16 digits, conditions up to 1e4. */
const TOLERANCE = 1e-8;

/** The second answer: the levels are moved by the effect, and everything is solved again. */
describe('the shift that an effect causes', () => {
  it('is what a solution of moved levels shows, with datum, paths, gaps and loose gains', async () => {
    let counted = 0;
    await fc.assert(
      fc.asyncProperty(
        randomBench(),
        fc.constantFrom('all', 'emitter', 'receiver', 'session', 'path', 'unit' as const),
        fc.boolean(),
        async ({ set, options }, target, isLimited) => {
          const lines = [line({ target, uncertainty: 0.3, ...(isLimited ? { from: 1200, to: 1800 } : {}) })];
          const model = buildModel(set, options);
          const effects = systematicEffects(set, lines);
          const width = set.frequencies.length;
          const plain = await solve(set, model);
          const found = await solve(set, model, { effects });
          const added = new Float64Array(plain.estimates.length);
          for (const { factors, reaches } of effects) {
            const levels = set.levels.map(
              (level, cell) => level + (reaches[cell % width]! ? factors[Math.floor(cell / width)]! : 0),
            );
            const moved = await solve({ ...set, levels }, model);
            moved.estimates.forEach((value, cell) => {
              added[cell] = added[cell]! + (0.3 * (value - plain.estimates[cell]!)) ** 2;
            });
          }
          found.uncertainty.forEach((u, cell) => {
            if (Number.isNaN(u)) return;
            counted++;
            const expected = plain.uncertainty[cell]! ** 2 + added[cell]!;
            expect(Math.abs(u * u - expected)).toBeLessThan(TOLERANCE * Math.max(1, expected));
          });
        },
      ),
      { seed: 20_04, numRuns: 60 },
    );
    expect(counted).toBeGreaterThan(300);
  });
});
