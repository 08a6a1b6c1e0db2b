import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { LINK_STATUS, type Solution } from '../../src/estimate/solution.ts';
import { solve } from '../../src/estimate/solve.ts';
import { buildModel } from '../../src/model/build-model.ts';
import type { Model } from '../../src/model/model.ts';
import { leastSquaresWithRestraint } from '../../src/numeric/dense.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { randomBench } from './random-bench.ts';

/** The promise of the sparse engine: 1e-9 relative to the size of what is compared. */
const TOLERANCE = 1e-9;

/** The whole system, all frequencies and shared gains in one dense matrix, solved by QR. */
function denseSolution(set: TakeSet, model: Model, solution: Solution) {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const gains = model.links.length - n;
  const columns = width * n + gains;
  const rows: number[][] = [];
  const levels: number[] = [];
  const weights: number[] = [];
  const cells: number[] = [];
  set.takes.forEach((_, t) => {
    for (let f = 0; f < width; f++) {
      const level = set.levels[t * width + f]!;
      if (Number.isNaN(level)) continue;
      const row = new Array<number>(columns).fill(0);
      model.chains[t]!.links.forEach((link, k) => {
        row[link < n ? f * n + link : width * n + link - n] = model.chains[t]!.factors[k]!;
      });
      rows.push(row);
      levels.push(level);
      weights.push(set.uncertainty![t * width + f]! ** -2);
      cells.push(t * width + f);
    }
  });
  const restraints: number[][] = [];
  for (const pattern of solution.patterns) {
    for (const f of pattern.frequencies) {
      for (const { restraint } of pattern.separability.directions) {
        const row = new Array<number>(columns).fill(0);
        restraint.forEach((entry, link) => {
          row[f * n + link] = entry;
        });
        restraints.push(row);
      }
    }
  }
  solution.gains.forEach((gain, g) => {
    if (gain.status !== 'datum') return;
    const row = new Array<number>(columns).fill(0);
    row[width * n + g] = 1;
    restraints.push(row);
  });
  const dense = leastSquaresWithRestraint(
    rows,
    levels,
    { rows: restraints, values: restraints.map(() => 0) },
    { weights },
  );
  return { dense, cells, columns };
}

describe('sparse least squares against dense QR of the whole system', () => {
  it('agrees in values, covariance, residuals and redundancy to 1e-9 on random benches with gaps, paths and loose gains', async () => {
    let compared = 0;
    await fc.assert(
      fc.asyncProperty(randomBench(), async ({ set, options }) => {
        const model = buildModel(set, options);
        const solution = await solve(set, model);
        const { dense, cells, columns } = denseSolution(set, model, solution);
        const n = model.linksPerFrequency;
        const scale = Math.max(1, ...Array.from(dense.coefficients, Math.abs));
        for (let f = 0; f < set.frequencies.length; f++) {
          for (let link = 0; link < n; link++) {
            const at = f * n + link;
            if (LINK_STATUS[solution.status[at]!] === 'open') continue;
            compared++;
            expect(Math.abs(solution.estimates[at]! - dense.coefficients[at]!)).toBeLessThan(TOLERANCE * scale);
            const variance = dense.covarianceFactor[at * columns + at]!;
            expect(Math.abs(solution.uncertainty[at]! ** 2 - variance)).toBeLessThan(TOLERANCE * Math.max(1, variance));
          }
        }
        cells.forEach((cell, row) => {
          expect(Math.abs(solution.residuals[cell]! - dense.residuals[row]!)).toBeLessThan(TOLERANCE * scale);
          expect(Math.abs(solution.redundancy[cell]! - (1 - dense.leverages[row]!))).toBeLessThan(TOLERANCE);
        });
      }),
      { seed: 20_26, numRuns: 150 },
    );
    expect(compared).toBeGreaterThan(1000);
  });
});
