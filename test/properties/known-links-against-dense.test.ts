import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { LINK_STATUS, type Solution } from '../../src/estimate/solution.ts';
import { solve } from '../../src/estimate/solve.ts';
import { buildModel } from '../../src/model/build-model.ts';
import type { Model } from '../../src/model/model.ts';
import type { ModelOptions } from '../../src/model/model-options.ts';
import { leastSquaresWithRestraint } from '../../src/numeric/dense.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { randomBench } from './random-bench.ts';

/** The promise of the sparse engine: 1e-9 relative to the size of what is compared. */
const TOLERANCE = 1e-9;

/** Benches with certificates of some units and levels of a path, over part of the frequencies. */
const knownBench = fc
  .record({
    bench: randomBench(),
    certified: fc.uniqueArray(fc.nat(6), { maxLength: 3 }),
    level: fc.double({ min: -30, max: 0, noNaN: true }),
    u: fc.double({ min: 0.05, max: 1, noNaN: true }),
    path: fc.boolean(),
  })
  .map(({ bench: { set, options }, certified, level, u, path }) => {
    const table = {
      place: { file: 'table.csv', line: 2 },
      frequency: Float64Array.of(1000, 1700),
      level: Float64Array.of(level, level + 2),
      uncertainty: Float64Array.of(u, 2 * u),
    };
    const paths = [...new Set(set.takes.map((take) => take.path))];
    const emitters = new Set(set.takes.map((take) => take.emitter));
    const references = certified
      .map((k) => `U${k}`)
      .filter((unit) => emitters.has(unit))
      .map((unit) => ({ ...table, unit, mount: '', role: options.model === 'directional' ? 'emit' : 'both' }) as const);
    const known: ModelOptions = { ...options, references, path: path ? [{ ...table, path: paths[0]! }] : 'free' };
    return { set, options: known };
  });

/** The whole system with known values as rows and conventions as restraints. */
function dense(set: TakeSet, model: Model, solution: Solution) {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const columns = width * n + model.links.length - n;
  const rowOf = (entries: readonly (readonly [number, number])[]) => {
    const row = new Array<number>(columns).fill(0);
    for (const [at, entry] of entries) row[at] = entry;
    return row;
  };
  const rows: number[][] = [];
  const values: number[] = [];
  const weights: number[] = [];
  for (let f = 0; f < width; f++) {
    const column = (link: number) => (link < n ? f * n + link : width * n + link - n);
    model.chains.forEach(({ links, factors }, t) => {
      const level = set.levels[t * width + f]!;
      if (Number.isNaN(level)) return;
      rows.push(rowOf(links.map((link, k) => [column(link), factors[k]!])));
      values.push(level);
      weights.push(set.uncertainty![t * width + f]! ** -2);
    });
    for (let link = 0; link < n; link++) {
      const prior = model.links[link]!.prior;
      if (prior === undefined || Number.isNaN(prior.value[f]!)) continue;
      rows.push(rowOf([[column(link), 1]]));
      values.push(prior.value[f]!);
      weights.push(prior.uncertainty[f]! ** -2);
    }
  }
  const restraints = solution.patterns.flatMap(({ frequencies, separability }) =>
    frequencies.flatMap((f) =>
      separability.directions.map(({ restraint }) => rowOf([...restraint].map((entry, link) => [f * n + link, entry]))),
    ),
  );
  solution.gains.forEach(({ status }, g) => {
    if (status === 'datum') restraints.push(rowOf([[width * n + g, 1]]));
  });
  const fit = leastSquaresWithRestraint(
    rows,
    values,
    { rows: restraints, values: restraints.map(() => 0) },
    { weights },
  );
  return { ...fit, columns };
}

describe('known links against dense QR of the whole system', () => {
  it('values and the whole covariance block of each frequency agree, with certificates, known paths and loose gains', async () => {
    let compared = 0;
    let withCommonPart = 0;
    await fc.assert(
      fc.asyncProperty(knownBench, async ({ set, options }) => {
        const model = buildModel(set, options);
        const solution = await solve(set, model);
        const whole = dense(set, model, solution);
        const n = model.linksPerFrequency;
        const scale = Math.max(1, ...Array.from(whole.coefficients, Math.abs));
        for (const { frequencies, scales, matrix, common } of solution.covariance) {
          frequencies.forEach((f, k) => {
            const told = [...Array(n).keys()].filter((link) => LINK_STATUS[solution.status[f * n + link]!] !== 'open');
            for (const a of told) {
              expect(Math.abs(solution.estimates[f * n + a]! - whole.coefficients[f * n + a]!)).toBeLessThan(
                TOLERANCE * scale,
              );
              const variance = whole.covarianceFactor[(f * n + a) * whole.columns + f * n + a]!;
              expect(Math.abs(solution.uncertainty[f * n + a]! ** 2 - variance)).toBeLessThan(
                TOLERANCE * Math.max(1, variance),
              );
              for (const b of told) {
                const expected = whole.covarianceFactor[(f * n + a) * whole.columns + f * n + b]!;
                const covariance = scales[k]! * matrix[a * n + b]! + (common?.[a * n + b] ?? 0);
                expect(Math.abs(covariance - expected)).toBeLessThan(TOLERANCE * Math.max(1, Math.abs(expected)));
                compared++;
                if ((common?.[a * n + b] ?? 0) !== 0) withCommonPart++;
              }
            }
          });
        }
      }),
      { seed: 7, numRuns: 40 },
    );
    expect(compared).toBeGreaterThan(1000);
    expect(withCommonPart).toBeGreaterThan(200);
  });
});
