import { describe, expect, it } from 'vitest';
import { solve } from '../../src/estimate/solve.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { randomStream } from '../../src/numeric/random.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { type TakeLine, takeSetOf } from '../take-set-of.ts';

const FREQUENCIES = [1000, 1300, 1700, 2200];
const OPTIONS = { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' } as const;

/** All pairs of five units with scatter, gaps and an own uncertainty at every reading. */
function randomSet(seed: number): TakeSet {
  const random = randomStream(seed);
  const lines: TakeLine[] = [];
  for (let i = 0; i < 5; i++) {
    for (let j = i + 1; j < 5; j++) {
      const levels = FREQUENCIES.map((_, f) =>
        random.uniform() < 0.1 ? Number.NaN : -20 - i - j + f + random.normal(),
      );
      lines.push({ emitter: `U${i}`, receiver: `U${j}`, levels });
    }
  }
  const set = takeSetOf(FREQUENCIES, lines);
  return { ...set, uncertainty: set.levels.map(() => 0.1 + random.uniform()) };
}

describe('residual and redundancy of a reading', () => {
  // Source: deleted residual, Cook & Weisberg, Residuals and Influence in Regression, 1982, section 2.2.
  it.each([1, 2, 3, 4])(
    'residual / redundancy is its distance from a fit without it, u² / redundancy the variance of that: set %d',
    async (seed) => {
      const set = randomSet(seed);
      const model = buildModel(set, OPTIONS);
      const all = await solve(set, model);
      const [width, n] = [FREQUENCIES.length, model.linksPerFrequency];
      let compared = 0;
      for (let take = 0; take < set.takes.length; take++) {
        const levels = set.levels.map((level, cell) => (Math.floor(cell / width) === take ? Number.NaN : level));
        const without = await solve({ ...set, levels }, model);
        const [a, b] = model.chains[take]!.links as [number, number];
        for (let f = 0; f < width; f++) {
          const cell = take * width + f;
          const isOpen = without.status[f * n + a] === 2 || without.status[f * n + b] === 2;
          if (Number.isNaN(set.levels[cell]!)) continue;
          expect(all.redundancy[cell] === 0).toBe(isOpen);
          if (isOpen) continue;
          const block = without.covariance.find(({ frequencies }) => frequencies.includes(f))!;
          const scale = block.scales[block.frequencies.indexOf(f)]!;
          const sum = block.matrix[a * n + a]! + 2 * block.matrix[a * n + b]! + block.matrix[b * n + b]!;
          const variance = set.uncertainty![cell]! ** 2;
          const distance = set.levels[cell]! - without.estimates[f * n + a]! - without.estimates[f * n + b]!;
          expect(all.residuals[cell]! / all.redundancy[cell]!).toBeCloseTo(distance, 9);
          expect(variance / all.redundancy[cell]!).toBeCloseTo(variance + scale * sum, 9);
          compared++;
        }
      }
      expect(compared).toBeGreaterThan(20);
    },
  );
});
