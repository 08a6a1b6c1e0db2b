/** Published checks of lack of fit, additivity and closed loops, through the findings; the source stands with each test. */
import { expect, test } from 'vitest';
import { solve } from '../../src/estimate/solve.ts';
import { lackOfFitDesign, lackOfFitTest, splitMisfit } from '../../src/findings/lack-of-fit.ts';
import { levelMisfit } from '../../src/findings/level-misfit.ts';
import { loopFindings } from '../../src/findings/loops.ts';
import { wholeSet } from '../../src/findings/whole-set.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { detectability } from '../../src/numeric/detectability.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

function expectClose(value: number, expected: number, relative: number): void {
  expect(Math.abs(value / expected - 1), `${value} for ${expected}`).toBeLessThan(relative);
}

/** M. Kutner et al., Applied Linear Statistical Models, 5th ed., section 3.7 (bank data, recalled and reproduced). */
test('lack of fit against pure error: eleven deposits on a line', () => {
  const x = [125, 100, 200, 75, 150, 175, 75, 175, 125, 200, 100];
  const y = Float64Array.of(160, 112, 124, 28, 152, 156, 42, 124, 150, 104, 136);
  const values = [...new Set(x)];
  const design = lackOfFitDesign(
    {
      start: Int32Array.from({ length: 12 }, (_, r) => 2 * r),
      column: Int32Array.from({ length: 22 }, (_, k) => k % 2),
      factor: Float64Array.from(x.flatMap((value) => [1, value])),
      columns: 2,
    },
    Int32Array.from(x, (value) => values.indexOf(value)),
  );
  expect([design.lackDof, design.pureDof]).toEqual([4, 5]);
  const { lack, pure } = splitMisfit(design, y);
  const squares = (vector: Float64Array) => vector.reduce((sum, value) => sum + value * value, 0);
  expectClose(squares(pure), 1148, 1e-6);
  expectClose(squares(lack), 13593.570681, 1e-6);
  const { f, pValue } = lackOfFitTest(squares(lack), design.lackDof, squares(pure), design.pureDof);
  expectClose(f, 14.8013618, 1e-6);
  expectClose(pValue, 0.00559381, 1e-6);
});

/** D. Montgomery, Design and Analysis of Experiments, 5th ed., example 5-2 (data recalled, digits recomputed): three emitters, five receivers. */
test("Tukey's test of additivity on a table of three emitters and five receivers", () => {
  const table = [
    [5, 4, 6, 3, 5],
    [3, 1, 4, 2, 3],
    [1, 1, 3, 1, 2],
  ];
  const lines = table.flatMap((row, e) =>
    row.map((level, r): TakeLine => ({ emitter: `E${e}`, receiver: `R${r}`, levels: [level] })),
  );
  const set = takeSetOf([1000], lines);
  const [band] = levelMisfit(set, buildModel(set, DEFAULT_MODEL_OPTIONS)).bands;
  const { slope, sumOfSquares, restSumOfSquares, restDof, f, p } = band!.additivity;
  expect([band!.pairs, band!.dof, restDof]).toEqual([15, 8, 7]);
  expectClose(slope, 0.0738916256, 1e-9);
  expectClose(sumOfSquares, 0.0985221675, 1e-9);
  expectClose(restSumOfSquares, 1.9014778325, 1e-9);
  expectClose(f, 0.3626943005, 1e-9);
  expectClose(p, 0.5660025886, 1e-9);
});

/** Closed condition of n observations of equal uncertainty; derived: each redundancy 1/n, all |w| equal to the closure over σ √n. */
test('an even ring of n pairs: the closure in units of its u is the |w| of every pair, whose smallest shift is δ0 σ √n', async () => {
  for (const n of [4, 6]) {
    const pairs = Array.from({ length: n }, (_, k) => [`${k}>${(k + 1) % n}`, 10 + ((7 * k) % 5)] as const);
    const set = takeSetOf([1000], pairsOf(Object.fromEntries(pairs)));
    const sigma = 0.05;
    const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal', datum: 'balanced' });
    const solution = await solve(set, model, { givenUncertainty: sigma });
    const { loops } = loopFindings(set, model, solution);
    expect(loops).toHaveLength(1);
    const [band] = loops[0]!.bands;
    const alternating = pairs.reduce((sum, [, level], k) => sum + (-1) ** k * level, 0);
    expect(Math.abs(alternating)).toBeGreaterThan(0);
    expectClose(Math.abs(band!.closure), Math.abs(alternating), 1e-12);
    expectClose(band!.uncertainty, sigma * Math.sqrt(n), 1e-12);
    solution.residuals.forEach((residual, t) => {
      const redundancy = solution.redundancy[t]!;
      expectClose(redundancy, 1 / n, 1e-9);
      expectClose(Math.abs(residual) / (sigma * Math.sqrt(redundancy)), Math.abs(band!.standardised), 1e-9);
    });
    if (n === 4) expectClose(detectability(0.001, 0.8) * band!.uncertainty, 8.264296 * sigma, 1e-6);
  }
});

/** Complete set of four: B. Griffing 1956, method 4; levels constructed, residual sum of squares 0.01 on 2 degrees of freedom. */
test('four units, six pairs with u = 0.05 dB: chi-square 4 on 2 degrees of freedom, p = exp(−2)', async () => {
  const levels = { '1>2': -40.2, '1>3': -38.9, '1>4': -45.1, '2>3': -41.0, '2>4': -47.3, '3>4': -45.8 };
  const set = takeSetOf([1000], pairsOf(levels));
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  const { bands, chiSquareP, pureErrorFrom } = wholeSet(
    set,
    model,
    await solve(set, model, { givenUncertainty: 0.05 }),
  );
  expectClose(bands[0]!.chiSquare!.chiSquare, 4, 1e-9);
  expectClose(bands[0]!.chiSquare!.dof, 2, 1e-9);
  expectClose(chiSquareP, Math.exp(-2), 1e-9);
  expect([pureErrorFrom, bands[0]!.lackOfFit]).toEqual(['nothing', undefined]);
});
