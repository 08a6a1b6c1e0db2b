import fc from 'fast-check';
import { expect, test } from 'vitest';
import { solve } from '../../src/estimate/solve.ts';
import { evenWalks } from '../../src/findings/even-walks.ts';
import { loopFindings } from '../../src/findings/loops.ts';
import { mergedChains } from '../../src/findings/merged-chains.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { nullSpace } from '../../src/numeric/null-space.ts';
import { randomBench } from './random-bench.ts';

const RUNS = { numRuns: 300, seed: 11 };

/** Rank by elimination, which has nothing in common with the walks. */
const rank = (rows: readonly Float64Array[], columns: number) => columns - nullSpace(rows, columns).length;

test('every loop cancels all links, loops are independent, and what is not listed is counted', () => {
  fc.assert(
    fc.property(randomBench(), ({ set, options }) => {
      const model = buildModel(set, options);
      const chains = mergedChains(set, model, new Set());
      const { walks, independent } = evenWalks(chains, Number.POSITIVE_INFINITY);
      const links = chains.map(({ links, factors }) => {
        const row = new Float64Array(model.links.length);
        links.forEach((link, k) => {
          row[link] = factors[k]!;
        });
        return row;
      });
      expect(independent).toBe(chains.length - rank(links, model.links.length));
      const sums = walks.map(({ terms }) => {
        const sum = new Float64Array(chains.length);
        for (const { chain, factor } of terms) sum[chain] = factor;
        return sum;
      });
      for (const sum of sums) {
        const left = model.links.map((_, link) => sum.reduce((total, s, c) => total + s * links[c]![link]!, 0));
        expect(left.every((value) => value === 0)).toBe(true);
      }
      expect(rank(sums, chains.length)).toBe(walks.length);
      // Without paths and gains to cancel there is a walk for every sum, and it goes nowhere more than twice.
      if (chains.every(({ labels }) => labels.join() === chains[0]!.labels.join())) {
        expect(walks.length).toBe(independent);
        expect(sums.every((sum) => sum.every((value) => Math.abs(value) <= 2))).toBe(true);
      }
    }),
    RUNS,
  );
});

/** Levels below 200 dB, sums of up to a dozen of them. */
const ROUNDING = 200 * 12 * 4 * Number.EPSILON;

test('in an additive set every loop closes, at every band and over all paths and sessions', async () => {
  await fc.assert(
    fc.asyncProperty(randomBench(), fc.nat(1000), async ({ set, options }, seed) => {
      const model = buildModel(set, options);
      const width = set.frequencies.length;
      const value = (link: number, f: number) =>
        20 * Math.sin(seed + 7 * link + (link < model.linksPerFrequency ? f : 0));
      const levels = set.levels.map((level, cell) => {
        const { links, factors } = model.chains[Math.floor(cell / width)]!;
        const sum = links.reduce((total, link, k) => total + factors[k]! * value(link, cell % width), 0);
        return Number.isNaN(level) ? level : sum;
      });
      const additive = { ...set, levels };
      const { loops } = loopFindings(additive, model, await solve(additive, model));
      for (const { bands } of loops) for (const { closure } of bands) expect(Math.abs(closure)).toBeLessThan(ROUNDING);
    }),
    { numRuns: 60, seed: 12 },
  );
});
