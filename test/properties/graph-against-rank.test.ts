import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildModel } from '../../src/model/build-model.ts';
import { findPatterns } from '../../src/model/find-patterns.ts';
import { rankOf } from '../../src/numeric/dense.ts';
import { randomBench } from './random-bench.ts';

describe('what can be told apart, by graph and by rank', () => {
  it('counts the same rank as the singular values of the incidence, pattern by pattern', () => {
    fc.assert(
      fc.property(randomBench(), ({ set, options }) => {
        const model = buildModel(set, { ...options, looseGain: false });
        for (const { takes, separability } of findPatterns(set, model).patterns) {
          const rows = takes.map((t) => {
            const row = new Array<number>(model.linksPerFrequency).fill(0);
            model.chains[t]!.links.forEach((link, k) => {
              row[link] = model.chains[t]!.factors[k]!;
            });
            return row;
          });
          expect(separability.rank).toBe(rows.length === 0 ? 0 : rankOf(rows));
          for (const { movement } of separability.directions) {
            // A free direction is one that no reading can see.
            for (const row of rows) expect(row.reduce((sum, x, i) => sum + x * movement[i]!, 0)).toBeCloseTo(0, 9);
          }
        }
      }),
      { seed: 4, numRuns: 300 },
    );
  });

  it('gives every free direction a restraint that takes it away, independently of the others', () => {
    fc.assert(
      fc.property(randomBench(), ({ set, options }) => {
        const model = buildModel(set, { ...options, looseGain: false });
        for (const { separability } of findPatterns(set, model).patterns) {
          const { directions } = separability;
          if (directions.length === 0) continue;
          const gram = directions.map(({ restraint }) =>
            directions.map(({ movement }) => restraint.reduce((sum, x, i) => sum + x * movement[i]!, 0)),
          );
          expect(rankOf(gram)).toBe(directions.length);
        }
      }),
      { seed: 5, numRuns: 300 },
    );
  });
});
