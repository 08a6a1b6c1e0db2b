/** Published and constructed checks of weighted means, consistency and scores of agreement; the source stands with each test. */
import { describe, expect, test } from 'vitest';
import { solve } from '../../src/estimate/solve.ts';
import { compareResponses } from '../../src/findings/compare-responses.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { chiSquareUpper } from '../../src/numeric/chi-square.ts';
import { reml } from '../../src/numeric/reml.ts';
import { coverageFactor } from '../../src/numeric/student-t.ts';
import type { SavedResult } from '../../src/readings/saved-result.ts';
import { type TakeLine, takeSetOf } from '../take-set-of.ts';

/**
 * Source of the data: PCB 105 in sediment, CCQM-K25, as distributed with an R metrology package; of the procedure: M. G.
 * Cox 2002, Metrologia 39, 589–595, procedure A (recalled from memory; results recomputed). Seven laboratories are seven
 * readings of a unit against itself, whose level is twice the response.
 */
describe('a weighted mean of seven results', () => {
  const x = [10.21, 10.9, 10.94, 10.58, 10.81, 9.62, 10.8];
  const u = [0.381, 0.25, 0.13, 0.41, 0.445, 0.196, 0.093];
  const lines = x.map(
    (value, i): TakeLine => ({
      emitter: 'A',
      receiver: 'A',
      repeat: `${i + 1}`,
      levels: [2 * value],
      u: 2 * u[i]!,
    }),
  );
  const solved = async () => {
    const set = takeSetOf([1000], lines);
    return solve(set, buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' }));
  };

  test('mean, uncertainty, chi-square and Birge ratio', async () => {
    const { estimates, uncertainty, residuals, degreesOfFreedom } = await solved();
    expect(estimates[0]).toBeCloseTo(10.688564585, 9);
    expect(uncertainty[0]).toBeCloseTo(0.065273049, 9);
    const chiSquare = residuals.reduce((sum, residual, i) => sum + (residual / (2 * u[i]!)) ** 2, 0);
    expect(chiSquare).toBeCloseTo(37.336935526, 8);
    expect(degreesOfFreedom[0]).toBeCloseTo(6, 9);
    expect(Math.abs(chiSquareUpper(chiSquare, 6) / 1.51363e-6 - 1)).toBeLessThan(1e-6);
    expect(Math.sqrt(chiSquare / 6)).toBeCloseTo(2.4945586, 7);
  });

  test('degrees of equivalence, U(d) = 2 √(u² − u_ref²), are residuals with their redundancy', async () => {
    const { residuals, redundancy } = await solved();
    const expected = [
      [-0.478565, 0.750734, -0.6375],
      [0.211435, 0.482657, 0.4381],
      [0.251435, 0.22485, 1.1182],
      [-0.108565, 0.809542, -0.1341],
      [0.121435, 0.880374, 0.1379],
      [-1.068565, 0.369624, -2.891],
      [0.111435, 0.13249, 0.8411],
    ] as const;
    expected.forEach(([difference, expanded, score], i) => {
      const [d, U] = [residuals[i]! / 2, 2 * u[i]! * Math.sqrt(redundancy[i]!)];
      expect(Math.abs(d - difference)).toBeLessThan(1e-6);
      expect(Math.abs(U - expanded)).toBeLessThan(1e-6);
      expect(Math.abs(d / U - score)).toBeLessThan(5.1e-5);
    });
  });

  test('excess variance by restricted maximum likelihood', () => {
    const fit = reml({
      fixed: x.map(() => [1]),
      random: [x.map((_, i) => x.map((__, j) => (i === j ? 1 : 0)))],
      responses: [x],
      knownVariances: u.map((own) => own * own),
    });
    expect(Math.abs(Math.sqrt(fit.variances[0]!) - 0.462447)).toBeLessThan(1e-6);
    expect(Math.abs(fit.coefficients[0]![0]! - 10.556452)).toBeLessThan(1e-6);
    expect(Math.abs(Math.sqrt(fit.covariance[0]!) - 0.203104)).toBeLessThan(1e-6);
  });
});

/**
 * ISO/IEC 17043 and ISO 13528: E_n = (x − X) / √(U_x² + U_X²), limit 1; a common uncertainty is taken out of both first.
 * Numbers constructed: two determinations, −18.12 dB (U = 0.71, k = 2) and −17.30 dB (U = 0.60).
 */
describe('the score of two determinations of one unit', () => {
  const scoreWith = (common: number) => {
    const [first, second] = [0.71 / 2, 0.6 / 2];
    const coverage = 0.95;
    const variances = [first ** 2, second ** 2];
    const result: SavedResult = {
      responses: ['first', 'second'].map((unit) => ({ unit, mount: '', role: 'both' })),
      frequencies: Float64Array.of(1000),
      levels: Float64Array.of(-18.12, -17.3),
      uncertainty: Float64Array.of(first, second),
      reseat: new Float64Array(2).fill(Number.NaN),
      partner: new Float64Array(2).fill(Number.NaN),
      dof: new Float64Array(2).fill(Number.POSITIVE_INFINITY),
      isDatum: [false, false],
      covariance: (_, a, b) => (a === b ? variances[a]! : common ** 2),
      coverage,
    };
    const [difference] = compareResponses(result, 0, 1).differences;
    expect(difference!.verdict).toBe(common === 0 ? 'agree' : 'differ');
    // k = 2 in place of the factor for 95 %.
    return difference!.level / (2 * (difference!.expanded / coverageFactor(coverage, Number.POSITIVE_INFINITY)));
  };

  test('with independent uncertainties they are consistent', () => {
    expect(scoreWith(0)).toBeCloseTo(-0.8821285, 7);
  });

  test('with 0.2 dB in common they are not', () => {
    expect(scoreWith(0.2)).toBeCloseTo(-1.1116664, 7);
  });
});
