import { describe, expect, it } from 'vitest';
import { type ReadingScatter, readingScatter } from '../../src/estimate/reading-scatter.ts';
import type { Solution } from '../../src/estimate/solution.ts';
import { solve } from '../../src/estimate/solve.ts';
import { startingLevels } from '../../src/findings/screening-levels.ts';
import { buildModel } from '../../src/model/build-model.ts';
import type { Model } from '../../src/model/model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { choleskyInPlace, choleskyInverse } from '../../src/numeric/cholesky.ts';
import { randomStream } from '../../src/numeric/random.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';

/** The promise for generalised least squares: 1e-8 relative to the size of what is compared. */
const TOLERANCE = 1e-8;

const bench = (seed: number) =>
  simulatePairs({
    seed,
    units: 5,
    seatings: 3,
    repeats: 2,
    mounted: 'for each round',
    repeatScatter: 0.1,
    reseatScatter: 0.4,
    partnerScatter: 0.2,
    frequencies: logSpaced(8, 10_000, 40_000),
  }).set;

/** Every third take keeps its unit mounted, others get labels of their own, some readings are missing. */
function mixedLabels(set: TakeSet, seed: number): TakeSet {
  const stream = randomStream(seed, 9);
  const takes = set.takes.map((take) => {
    const own = stream.uniform();
    if (own < 0.3) return { ...take, emitterSeating: `only ${take.emitter} ${take.receiver} ${take.emitterSeating}` };
    return own < 0.4 ? { ...take, receiverSeating: '' } : take;
  });
  return { ...set, takes, levels: set.levels.map((level) => (stream.uniform() < 0.05 ? Number.NaN : level)) };
}

async function solved(set: TakeSet) {
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  const first = await solve(set, model);
  const { layout, bands } = startingLevels(set, model, first);
  const scatter = readingScatter(set, model, layout, bands, first.readingUncertainty)!;
  return { model, scatter, solution: await solve(set, model, { scatter }) };
}

function inverse(matrix: Float64Array, n: number): Float64Array {
  const result = new Float64Array(n * n);
  if (!choleskyInPlace(matrix, n)) throw new Error('not positive definite');
  choleskyInverse(matrix, n, result, new Float64Array(n * n));
  return result;
}

/** (XᵀV⁻¹X)⁻¹ and (XᵀV⁻¹X)⁻¹XᵀV⁻¹y with the covariance V of all readings of a frequency written out. */
function generalisedLeastSquares(set: TakeSet, model: Model, scatter: ReadingScatter, f: number) {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const level = scatter.levelOf[f]!;
  const takes = [...set.takes.keys()].filter((t) => !Number.isNaN(set.levels[t * width + f]!));
  const count = takes.length;
  const { layout, shared, sharedDeviation } = scatter;
  const V = new Float64Array(count * count);
  const share = (end: number) => level.seating?.shares[end] ?? 0;
  takes.forEach((t, i) => {
    takes.forEach((s, j) => {
      const [seat, other] = [layout.seatOf[t]!, layout.seatOf[s]!];
      let covariance = t === s ? scatter.single[t * width + f]! ** 2 : 0;
      if (layout.chainOfSeat[seat] === layout.chainOfSeat[other]) {
        covariance += level.fitted.chainPartner[layout.chainOfSeat[seat]!]!;
      }
      if (seat === other) for (const end of shared.ownEnds[seat]!) covariance += share(end);
      for (const seating of shared.ofTake[t]!) {
        if (shared.ofTake[s]!.includes(seating)) {
          covariance += sharedDeviation[f * shared.seatings.length + seating]! ** 2;
        }
      }
      V[i * count + j] = covariance;
    });
  });
  const weights = inverse(V, count);
  const normal = new Float64Array(n * n);
  const side = new Float64Array(n);
  takes.forEach((t, i) => {
    takes.forEach((s, j) => {
      model.chains[t]!.links.forEach((a, k) => {
        const left = model.chains[t]!.factors[k]! * weights[i * count + j]!;
        side[a] = side[a]! + left * set.levels[s * width + f]!;
        model.chains[s]!.links.forEach((b, l) => {
          normal[a * n + b] = normal[a * n + b]! + left * model.chains[s]!.factors[l]!;
        });
      });
    });
  });
  const covariance = inverse(normal, n);
  const estimates = Float64Array.from({ length: n }, (_, i) =>
    side.reduce((sum, value, j) => sum + covariance[i * n + j]! * value, 0),
  );
  return { covariance, estimates };
}

function compare(set: TakeSet, model: Model, scatter: ReadingScatter, solution: Solution): number {
  const n = model.linksPerFrequency;
  let compared = 0;
  for (const { frequencies, scales, matrix } of solution.covariance) {
    frequencies.forEach((f, k) => {
      const oracle = generalisedLeastSquares(set, model, scatter, f);
      for (let i = 0; i < n; i++) {
        const size = Math.max(1, Math.abs(oracle.estimates[i]!));
        expect(Math.abs(solution.estimates[f * n + i]! - oracle.estimates[i]!)).toBeLessThan(TOLERANCE * size);
        for (let j = 0; j < n; j++) {
          const expected = oracle.covariance[i * n + j]!;
          expect(Math.abs(scales[k]! * matrix[i * n + j]! - expected)).toBeLessThan(
            TOLERANCE * Math.max(expected, 1e-2),
          );
          compared++;
        }
      }
    });
  }
  return compared;
}

describe('seatings that serve several pairs, against dense generalised least squares', () => {
  it('each unit mounted once a round: estimates and the whole covariance agree', async () => {
    for (const seed of [1, 2, 3]) {
      const set = bench(seed);
      const { model, scatter, solution } = await solved(set);
      expect(scatter.shared.seatings).toHaveLength(15);
      expect(compare(set, model, scatter, solution)).toBe(8 * 25);
    }
  });

  it('shared, nested and unlabelled seatings in one set, with gaps: they agree as well', async () => {
    for (const seed of [4, 5, 6]) {
      const set = mixedLabels(bench(seed), seed);
      const { model, scatter, solution } = await solved(set);
      expect(scatter.shared.seatings.length).toBeGreaterThan(3);
      expect(scatter.shared.ownEnds.some((ends) => ends.length === 1)).toBe(true);
      expect(compare(set, model, scatter, solution)).toBe(8 * 25);
    }
  });

  it('counting the seatings as independent would promise a fifth of the uncertainty too little', async () => {
    const set = bench(7);
    const { model, scatter, solution } = await solved(set);
    const takes = set.takes.map((take, t) => ({ ...take, emitterSeating: `${t >> 1}`, receiverSeating: `${t >> 1}` }));
    const apart = { ...set, takes };
    const first = await solve(apart, model);
    const { layout } = startingLevels(apart, model, first);
    const bands = [...new Set(scatter.levelOf)].map((level) => ({
      scatter: level!,
      frequencies: [...scatter.levelOf.keys()].filter((f) => scatter.levelOf[f] === level),
    }));
    const nested = readingScatter(apart, model, layout, bands, first.readingUncertainty)!;
    expect(nested.shared.seatings).toEqual([]);
    const independent = await solve(apart, model, { scatter: nested });
    const mean = (values: Float64Array) => values.reduce((sum, value) => sum + value, 0) / values.length;
    expect(mean(independent.uncertainty)).toBeLessThan(0.8 * mean(solution.uncertainty));
  });

  it('residuals keep what a seating was found to be, so that level = responses + residual', async () => {
    const set = bench(8);
    const { model, solution } = await solved(set);
    const width = set.frequencies.length;
    set.takes.forEach((_, t) => {
      for (let f = 0; f < width; f++) {
        const fitted = model.chains[t]!.links.reduce(
          (sum, link) => sum + solution.estimates[f * model.linksPerFrequency + link]!,
          0,
        );
        expect(solution.residuals[t * width + f]).toBeCloseTo(set.levels[t * width + f]! - fitted, 9);
      }
    });
  });
});
