import fc from 'fast-check';
import type { ModelOptions } from '../../src/model/model-options.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { type TakeLine, takeSetOf } from '../take-set-of.ts';

/** A random bench: takes between a few units, gaps, paths, sessions and own uncertainties, with model options that suit it. */
export interface RandomBench {
  readonly set: TakeSet;
  readonly options: ModelOptions;
}

const FREQUENCIES = [1000, 1300, 1700, 2200];

const pick = <T>(values: readonly T[]) => fc.constantFrom(...values);

/** Benches of 2 to 7 units; connected or not, solvable or not. */
export function randomBench(): fc.Arbitrary<RandomBench> {
  return fc
    .record({
      units: fc.integer({ min: 2, max: 7 }),
      model: pick(['reciprocal', 'directional'] as const),
      datum: pick(['strict', 'balanced'] as const),
      looseGain: fc.boolean(),
      paths: fc.integer({ min: 1, max: 3 }),
      lines: fc.array(
        fc.record({
          emitter: fc.nat(6),
          receiver: fc.nat(6),
          path: fc.nat(2),
          session: fc.nat(2),
          u: fc.double({ min: 0.05, max: 2, noNaN: true }),
          levels: fc.array(fc.double({ min: -60, max: 20, noNaN: true }), { minLength: 4, maxLength: 4 }),
          gap: fc.nat(9),
        }),
        { minLength: 1, maxLength: 24 },
      ),
    })
    .map(({ units, model, datum, looseGain, paths, lines }) => {
      const takes = lines.map(
        (line): TakeLine => ({
          emitter: `U${line.emitter % units}`,
          receiver: `U${line.receiver % units}`,
          path: `p${line.path % paths}`,
          session: `s${line.session}`,
          u: line.u,
          levels: line.levels.map((level, f) => (f === line.gap ? Number.NaN : level)),
        }),
      );
      return { set: takeSetOf(FREQUENCIES, takes), options: { ...DEFAULT_MODEL_OPTIONS, model, datum, looseGain } };
    });
}
