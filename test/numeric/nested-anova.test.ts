import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { leastSquaresByQr } from '../../src/numeric/dense.ts';
import { nestedAnova, splitIntoStrata, squaredTraces } from '../../src/numeric/nested-anova.ts';
import { nestedReml } from '../../src/numeric/nested-reml.ts';
import { nestedRows } from '../../src/numeric/nested-rows.ts';
import { randomStream } from '../../src/numeric/random.ts';
import { reml } from '../../src/numeric/reml.ts';
import { randomDesign } from './random-nested-design.ts';

/** Machine epsilon × a few hundred operations × condition numbers below 1e4. */
const TOLERANCE = 1e-9;

const arbitraryDesign = fc.integer({ min: 1, max: 1e6 }).map(randomDesign);
const seeded = { seed: 11, numRuns: 30 };

type Matrix = readonly (readonly number[])[];

const transpose = (a: Matrix) => a[0]!.map((_, j) => a.map((row) => row[j]!));
const times = (a: Matrix, b: Matrix) => {
  const columns = transpose(b);
  return a.map((row) => columns.map((column) => row.reduce((sum, entry, k) => sum + entry * column[k]!, 0)));
};
const minus = (a: Matrix, b: Matrix) => a.map((row, i) => row.map((entry, j) => entry - b[i]![j]!));
const trace = (a: Matrix) => a.reduce((sum, row, i) => sum + row[i]!, 0);
const squares = (a: Matrix) => a.flat().reduce((sum, entry) => sum + entry * entry, 0);

/** Projection onto the columns, by Gram–Schmidt (twice over) on dense columns: independent of the code under test. */
function projector(columns: Matrix): number[][] {
  const basis: number[][] = [];
  for (const column of transpose(columns)) {
    let rest = [...column];
    for (let pass = 0; pass < 2; pass++) {
      for (const q of basis) {
        const part = q.reduce((sum, entry, i) => sum + entry * rest[i]!, 0);
        rest = rest.map((entry, i) => entry - part * q[i]!);
      }
    }
    const length = Math.hypot(...rest);
    if (length > 1e-6) basis.push(rest.map((entry) => entry / length));
  }
  return columns.map((_, i) => columns.map((__, j) => basis.reduce((sum, q) => sum + q[i]! * q[j]!, 0)));
}

describe('nested analysis of variance', () => {
  test('degrees of freedom and expected sums of squares agree with dense projections', () => {
    fc.assert(
      fc.property(arbitraryDesign, ({ design, dense, outer, inner }) => {
        const anova = nestedAnova(design);
        const byColumns = projector(dense);
        const byOuter = projector(dense.map((row, r) => [...row, ...outer[r]!]));
        const byInner = projector(dense.map((row, r) => [...row, ...inner[r]!]));
        const ofInner = minus(byInner, byOuter);
        const ofOuter = minus(byOuter, byColumns);
        expect(anova.dof).toEqual({
          within: Math.round(dense.length - trace(byInner)),
          inner: Math.round(trace(ofInner)),
          outer: Math.round(trace(ofOuter)),
        });
        const through = (a: Matrix, left: Matrix, right: Matrix) => times(times(transpose(left), a), right);
        expect(Math.abs(anova.innerOfInner - trace(through(ofInner, inner, inner)))).toBeLessThan(TOLERANCE);
        expect(Math.abs(anova.outerOfInner - trace(through(ofOuter, inner, inner)))).toBeLessThan(TOLERANCE);
        expect(Math.abs(anova.outerOfOuter - trace(through(ofOuter, outer, outer)))).toBeLessThan(TOLERANCE);
        const found = squaredTraces(anova);
        expect(Math.abs(found.innerInner - squares(through(ofInner, inner, inner)))).toBeLessThan(TOLERANCE);
        expect(Math.abs(found.outerInner - squares(through(ofOuter, inner, inner)))).toBeLessThan(TOLERANCE);
        expect(Math.abs(found.outerCross - squares(through(ofOuter, outer, inner)))).toBeLessThan(TOLERANCE);
        expect(Math.abs(found.outerOuter - squares(through(ofOuter, outer, outer)))).toBeLessThan(TOLERANCE);
      }),
      seeded,
    );
  });

  test('a response falls into its strata as under dense projections, and what the columns explain is in none', () => {
    fc.assert(
      fc.property(arbitraryDesign, ({ design, dense, outer, inner, seed }) => {
        const stream = randomStream(seed, 1);
        const noise = dense.map(() => stream.normal());
        const effects = dense[0]!.map(() => 20 * stream.normal());
        const y = dense.map((row, r) => noise[r]! + row.reduce((sum, entry, j) => sum + entry * effects[j]!, 0));
        const into = {
          within: new Float64Array(y.length),
          inner: new Float64Array(y.length),
          outer: new Float64Array(y.length),
        };
        splitIntoStrata(nestedAnova(design), Float64Array.from(y), into);
        const column = noise.map((value) => [value]);
        const byColumns = times(projector(dense), column);
        const byOuter = times(projector(dense.map((row, r) => [...row, ...outer[r]!])), column);
        const byInner = times(projector(dense.map((row, r) => [...row, ...inner[r]!])), column);
        noise.forEach((value, r) => {
          expect(Math.abs(into.within[r]! - (value - byInner[r]![0]!))).toBeLessThan(TOLERANCE);
          expect(Math.abs(into.inner[r]! - (byInner[r]![0]! - byOuter[r]![0]!))).toBeLessThan(TOLERANCE);
          expect(Math.abs(into.outer[r]! - (byOuter[r]![0]! - byColumns[r]![0]!))).toBeLessThan(TOLERANCE);
        });
      }),
      seeded,
    );
  });
});

describe('restricted maximum likelihood of nested groups', () => {
  test('agrees with the dense fit of the same model, several responses together', () => {
    for (let seed = 1; seed <= 12; seed++) {
      const { design, dense, outer, inner } = randomDesign(seed);
      const stream = randomStream(seed, 2);
      const responses = Array.from({ length: 4 }, () => {
        const [pairs, seatings] = [outer[0]!.map(() => stream.normal()), inner[0]!.map(() => 0.6 * stream.normal())];
        return Float64Array.from(
          outer,
          (_, r) => pairs[design.outer[r]!]! + seatings[design.inner[r]!]! + 0.3 * stream.normal(),
        );
      });
      const { columns } = nestedAnova(design).projections;
      const independent = dense.map((row) => Array.from(columns.kept, (column) => row[column]!));
      const expected = reml({ fixed: independent, random: [outer, inner], responses });
      const found = nestedReml([{ rows: nestedRows(design, columns.place), responses }], {
        outer: 0.5,
        inner: 0.5,
        within: 0.5,
      });
      expect([found.converged, expected.converged], `seed ${seed}`).toEqual([true, true]);
      // Both stop where a step is below 1e-9 of the total variance; what is left of the way is a few such steps.
      const tolerance = 1e-7;
      expect(Math.abs(found.variances.outer - expected.variances[0]!), `seed ${seed}`).toBeLessThan(tolerance);
      expect(Math.abs(found.variances.inner - expected.variances[1]!), `seed ${seed}`).toBeLessThan(tolerance);
      expect(Math.abs(found.variances.within - expected.residualVariance), `seed ${seed}`).toBeLessThan(tolerance);
    }
  });

  test('for balanced groups it is the analysis of variance', () => {
    const stream = randomStream(5);
    const outerOf = Array.from({ length: 24 }, (_, i) => Math.floor(i / 4));
    const innerOf = Array.from({ length: 24 }, (_, i) => Math.floor(i / 2));
    const design = {
      fixed: {
        start: Int32Array.from({ length: 25 }, (_, r) => r),
        column: new Int32Array(24),
        factor: new Float64Array(24).fill(1),
        columns: 1,
      },
      outer: Int32Array.from(outerOf),
      inner: Int32Array.from(innerOf),
    };
    const [pairs, seatings] = [Array.from({ length: 6 }, stream.normal), Array.from({ length: 12 }, stream.normal)];
    const y = Float64Array.from(outerOf, (p, r) => 3 * pairs[p]! + 2 * seatings[innerOf[r]!]! + stream.normal());
    const anova = nestedAnova(design);
    const into = { within: new Float64Array(24), inner: new Float64Array(24), outer: new Float64Array(24) };
    splitIntoStrata(anova, y, into);
    const mean = (part: Float64Array, dof: number) => part.reduce((sum, value) => sum + value * value, 0) / dof;
    const [within, inner, outer] = [mean(into.within, 12), mean(into.inner, 6), mean(into.outer, 5)];
    expect(anova.balanced).toBe(true);
    const { variances } = nestedReml([{ rows: nestedRows(design, Int32Array.of(0)), responses: [y] }], {
      outer: 1,
      inner: 1,
      within: 1,
    });
    expect(variances.within).toBeCloseTo(within, 6);
    expect(variances.inner).toBeCloseTo((inner - within) / 2, 6);
    expect(variances.outer).toBeCloseTo((outer - inner) / 4, 6);
    expect(inner).toBeGreaterThan(within);
    expect(outer).toBeGreaterThan(inner);
  });
});

describe('dense restricted maximum likelihood', () => {
  test('a variance that would be negative is 0, and the rest is as if it were not in the model', () => {
    // Group means agree better than the spread within groups allows.
    const y = [1, -1, 1.1, -1.1, 0.9, -0.9];
    const groups = y.map((_, i) => [0, 1, 2].map((g) => (Math.floor(i / 2) === g ? 1 : 0)));
    const fit = reml({ fixed: y.map(() => [1]), random: [groups], responses: [y] });
    expect(fit.converged).toBe(true);
    expect(fit.variances[0]).toBe(0);
    expect(fit.standardErrors[0]).toBeNaN();
    const { sumOfSquares } = leastSquaresByQr(
      y.map(() => [1]),
      y,
    );
    expect(fit.residualVariance).toBeCloseTo(sumOfSquares / 5, 7);
  });

  test('columns that are not independent are refused', () => {
    const twice = { fixed: [1, 2, 3, 4].map((x) => [x, 2 * x]), random: [], responses: [[1, 2, 2, 5]] };
    expect(() => reml(twice)).toThrow('rank');
  });
});
