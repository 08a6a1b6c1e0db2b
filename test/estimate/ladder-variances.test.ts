import { expect, test } from 'vitest';
import type { BandStrata } from '../../src/estimate/band-strata.ts';
import { equality, sharesOf, squareBelow } from '../../src/estimate/ladder-variances.ts';
import { type NestedAnova, nestedAnova, splitIntoStrata, squaredTraces } from '../../src/numeric/nested-anova.ts';
import { randomDesign } from '../numeric/random-nested-design.ts';

/** Machine epsilon × a few thousand operations. */
const TOLERANCE = 1e-10;

const SEEDS = [1, 2, 3, 4, 5, 6, 7, 8];

/** The matrix of the quadratic form that a stratum is, column by column from what the split makes of unit vectors. */
function matrixOf(anova: NestedAnova, stratum: 'inner' | 'outer', rows: number): Float64Array[] {
  return Array.from({ length: rows }, (_, r) => {
    const unit = new Float64Array(rows);
    unit[r] = 1;
    const into = { within: new Float64Array(rows), inner: new Float64Array(rows), outer: new Float64Array(rows) };
    splitIntoStrata(anova, unit, into);
    return into[stratum];
  });
}

test('unequal groups cost the degrees of freedom that the dense traces say', () => {
  for (const seed of SEEDS) {
    const { design } = randomDesign(seed);
    const rows = design.outer.length;
    const anova = nestedAnova(design);
    const traces = squaredTraces(anova);
    const variances = { outer: 0.9, inner: 1.7, within: 0.4 };
    for (const stratum of ['inner', 'outer'] as const) {
      const a = matrixOf(anova, stratum, rows);
      const v = (r: number, c: number) =>
        (design.outer[r] === design.outer[c] ? variances.outer : 0) +
        (design.inner[r] === design.inner[c] ? variances.inner : 0) +
        (r === c ? variances.within : 0);
      const av = a.map((row) => row.map((_, c) => row.reduce((sum, entry, k) => sum + entry * v(k, c), 0)));
      let [trace, squares] = [0, 0];
      av.forEach((row, r) => {
        trace += row[r]!;
        row.forEach((entry, c) => {
          squares += entry * av[c]![r]!;
        });
      });
      const expected = trace ** 2 / (anova.dof[stratum] * squares);
      expect(Math.abs(equality(stratum, variances, anova, traces) - expected), `seed ${seed}`).toBeLessThan(TOLERANCE);
    }
  }
});

test('but for the partner step, a pair mean square is expected as the combination that it is held against', () => {
  for (const seed of SEEDS) {
    const anova = nestedAnova(randomDesign(seed).design);
    const [inner, within] = [1.7, 0.4];
    const stratum = (dof: number) => ({
      sumOfSquares: 0,
      dof,
      products: new Float64Array(0),
      series: new Float64Array(0),
    });
    const band: BandStrata = {
      ...anova,
      frequencies: 1,
      strata: { within: stratum(anova.dof.within), inner: stratum(anova.dof.inner), outer: stratum(anova.dof.outer) },
      main: anova,
      parts: [],
    };
    const shares = sharesOf(band);
    const below = squareBelow(
      { value: within + shares.innerOfInner * inner, dof: 1e9 },
      { value: within, dof: 1e9 },
      shares,
    );
    const expected = within + (anova.outerOfInner / anova.dof.outer) * inner;
    expect(Math.abs(below!.value - expected), `seed ${seed}`).toBeLessThan(TOLERANCE);
  }
});
