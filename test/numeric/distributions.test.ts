import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  chiSquareLower,
  chiSquareQuantile,
  chiSquareUpper,
  chiSquareUpperQuantile,
} from '../../src/numeric/chi-square.ts';
import { fLower, fQuantile, fUpper, fUpperQuantile } from '../../src/numeric/f-distribution.ts';
import { logGamma } from '../../src/numeric/gamma-function.ts';
import { betaLower, betaUpper } from '../../src/numeric/incomplete-beta.ts';
import { gammaLower, gammaUpper } from '../../src/numeric/incomplete-gamma.ts';
import { noncentralChiSquareUpper } from '../../src/numeric/noncentral-chi-square.ts';
import { normalLower, normalQuantile, normalUpper, normalUpperQuantile } from '../../src/numeric/normal.ts';
import { digamma, trigamma } from '../../src/numeric/polygamma.ts';
import {
  coverageFactor,
  studentLower,
  studentQuantile,
  studentTwoSided,
  studentUpper,
  studentUpperQuantile,
} from '../../src/numeric/student-t.ts';
import {
  chiSquareValues,
  fValues,
  logGammaValues,
  noncentralValues,
  normalValues,
  polygammaValues,
  studentValues,
} from './high-precision-values.ts';

/** What the design asks of every tail and quantile. */
const RELATIVE = 1e-10;
/** A few roundings, for the functions without an exponent of hundreds. */
const ROUNDINGS = 2e-15;

function expectRelative(value: number, expected: number, tolerance: number, at: readonly number[]): void {
  const scale = Math.abs(expected);
  const distance = scale === 0 ? Math.abs(value) : Math.abs(value - expected) / scale;
  expect(distance, `${value} for ${expected} at ${at.join(', ')}`).toBeLessThanOrEqual(tolerance);
}

describe('tails agree with high-precision values to 1e-10 relative, down to 1e-300', () => {
  test('chi-square, 1 to 1e6 degrees of freedom', () => {
    for (const [dof, x, lower, upper] of chiSquareValues as [number, number, number, number][]) {
      expectRelative(chiSquareLower(x, dof), lower, RELATIVE, [dof, x]);
      expectRelative(chiSquareUpper(x, dof), upper, RELATIVE, [dof, x]);
      expectRelative(gammaLower(dof / 2, x / 2), lower, RELATIVE, [dof, x]);
      expectRelative(gammaUpper(dof / 2, x / 2), upper, RELATIVE, [dof, x]);
    }
  });

  test('F, 1 to 1e6 degrees of freedom on both sides', () => {
    for (const [dof1, dof2, f, lower, upper] of fValues as [number, number, number, number, number][]) {
      expectRelative(fLower(f, dof1, dof2), lower, RELATIVE, [dof1, dof2, f]);
      expectRelative(fUpper(f, dof1, dof2), upper, RELATIVE, [dof1, dof2, f]);
    }
  });

  test('Student t, 1 to 1e6 degrees of freedom', () => {
    for (const [dof, t, upper] of studentValues as [number, number, number][]) {
      expectRelative(studentUpper(t, dof), upper, RELATIVE, [dof, t]);
      expectRelative(studentLower(-t, dof), upper, RELATIVE, [dof, t]);
      expectRelative(studentTwoSided(-t, dof), 2 * upper, RELATIVE, [dof, t]);
      expectRelative(studentUpper(-t, dof), 1 - upper, RELATIVE, [dof, -t]);
    }
  });

  test('normal', () => {
    for (const [z, upper] of normalValues as [number, number][]) {
      expectRelative(normalUpper(z), upper, RELATIVE, [z]);
      expectRelative(normalLower(-z), upper, RELATIVE, [z]);
      expectRelative(studentUpper(z, Infinity), upper, RELATIVE, [z]);
    }
  });

  test('noncentral chi-square', () => {
    for (const [x, dof, noncentrality, upper] of noncentralValues as [number, number, number, number][]) {
      expectRelative(noncentralChiSquareUpper(x, dof, noncentrality), upper, RELATIVE, [x, dof, noncentrality]);
    }
  });
});

describe('quantiles return to the argument that the high-precision tail was made for', () => {
  // A quantile cannot be better than the double that holds its probability: of the two tails the smaller one is used.
  test('chi-square', () => {
    for (const [dof, x, lower, upper] of chiSquareValues as [number, number, number, number][]) {
      const value = lower < upper ? chiSquareQuantile(lower, dof) : chiSquareUpperQuantile(upper, dof);
      expectRelative(value, x, RELATIVE, [dof, x]);
    }
  });

  test('F', () => {
    for (const [dof1, dof2, f, lower, upper] of fValues as [number, number, number, number, number][]) {
      const value = lower < upper ? fQuantile(lower, dof1, dof2) : fUpperQuantile(upper, dof1, dof2);
      expectRelative(value, f, RELATIVE, [dof1, dof2, f]);
    }
  });

  test('Student t and normal, away from the middle', () => {
    for (const [dof, t, upper] of studentValues as [number, number, number][]) {
      if (t < 0.01) continue;
      expectRelative(studentUpperQuantile(upper, dof), t, RELATIVE, [dof, t]);
      expectRelative(studentQuantile(upper, dof), -t, RELATIVE, [dof, t]);
    }
    for (const [z, upper] of normalValues as [number, number][]) {
      if (z < 0.01) continue;
      expectRelative(normalUpperQuantile(upper), z, RELATIVE, [z]);
      expectRelative(normalQuantile(upper), -z, RELATIVE, [z]);
      expectRelative(studentQuantile(upper, Infinity), -z, RELATIVE, [z]);
    }
  });

  test('Student t keeps its digits next to the middle: t is (p − ½) over the density at 0', () => {
    // 2/(π) · … for one degree of freedom the density at 0 is 1/π.
    const p = 0.5 + 2 ** -40;
    expectRelative(studentQuantile(p, 1), Math.PI * 2 ** -40, RELATIVE, [p]);
    expectRelative(normalQuantile(p), Math.sqrt(2 * Math.PI) * 2 ** -40, RELATIVE, [p]);
  });

  test('closed forms for one and two degrees of freedom, down to 1e-300', () => {
    for (const p of [1e-300, 1e-100, 1e-9, 0.01, 0.2, 0.4]) {
      expectRelative(studentUpperQuantile(p, 1), 1 / Math.tan(Math.PI * p), RELATIVE, [p]);
      expectRelative(studentUpperQuantile(p, 2), (1 - 2 * p) / Math.sqrt(2 * p * (1 - p)), RELATIVE, [p]);
      expectRelative(chiSquareUpperQuantile(p, 2), -2 * Math.log(p), RELATIVE, [p]);
      expectRelative(fUpperQuantile(p, 2, 2), (1 - p) / p, RELATIVE, [p]);
    }
  });

  test('every quantile leads back to its probability (seeded)', () => {
    const dof = fc.double({ min: 0, max: 6, noNaN: true }).map((exponent) => 10 ** exponent);
    const p = fc.double({ min: -280, max: Math.log10(0.5), noNaN: true }).map((exponent) => 10 ** exponent);
    fc.assert(
      fc.property(dof, dof, p, (a, b, tail) => {
        expectRelative(chiSquareUpper(chiSquareUpperQuantile(tail, a), a), tail, RELATIVE, [a, tail]);
        expectRelative(studentUpper(studentUpperQuantile(tail, a), a), tail, RELATIVE, [a, tail]);
        const f = fUpperQuantile(tail, a, b);
        if (f < 1e290) expectRelative(fUpper(f, a, b), tail, RELATIVE, [a, b, tail]);
        const x = chiSquareQuantile(tail, a);
        if (x > 1e-290) expectRelative(chiSquareLower(x, a), tail, RELATIVE, [a, tail]);
      }),
      { seed: 20260, numRuns: 300 },
    );
  });
});

describe('borders', () => {
  test('infinite degrees of freedom are the limits of the distributions', () => {
    expectRelative(studentQuantile(0.975, 1e15), studentQuantile(0.975, Infinity), 1e-12, []);
    expectRelative(fUpper(1.7, 5, Infinity), chiSquareUpper(8.5, 5), ROUNDINGS, []);
    expectRelative(fLower(1.7, Infinity, 5), chiSquareUpper(5 / 1.7, 5), ROUNDINGS, []);
    expectRelative(fQuantile(0.9, 5, Infinity), chiSquareQuantile(0.9, 5) / 5, ROUNDINGS, []);
    expectRelative(fQuantile(0.9, Infinity, 5), 5 / chiSquareUpperQuantile(0.9, 5), ROUNDINGS, []);
    expect([fUpper(0.9, Infinity, Infinity), fUpper(1.1, Infinity, Infinity)]).toEqual([1, 0]);
  });

  test('probabilities 0 and 1 are the ends of the range', () => {
    expect([studentQuantile(0, 3), studentQuantile(0.5, 3), studentQuantile(1, 3)]).toEqual([-Infinity, 0, Infinity]);
    expect([normalQuantile(0), normalQuantile(0.5), normalQuantile(1)]).toEqual([-Infinity, 0, Infinity]);
    expect([chiSquareQuantile(0, 3), chiSquareQuantile(1, 3)]).toEqual([0, Infinity]);
    expect([chiSquareUpperQuantile(0, 3), chiSquareUpperQuantile(1, 3)]).toEqual([Infinity, 0]);
    expect([fQuantile(0, 3, 4), fUpperQuantile(0, 3, 4)]).toEqual([0, Infinity]);
    expect([chiSquareUpper(-1, 3), chiSquareUpper(Infinity, 3), fUpper(0, 3, 4), fUpper(Infinity, 3, 4)]).toEqual([
      1, 0, 1, 0,
    ]);
    expect([betaLower(2, 3, 0), betaUpper(2, 3, 0), betaLower(2, 3, 1)]).toEqual([0, 1, 1]);
    expect([studentUpper(Infinity, 3), studentUpper(-Infinity, 3), normalUpper(Infinity)]).toEqual([0, 1, 0]);
  });

  test('NaN stays NaN; impossible degrees of freedom and probabilities are refused', () => {
    for (const value of [chiSquareUpper(NaN, 3), fUpper(NaN, 3, 4), studentUpper(NaN, 3), normalUpper(NaN)]) {
      expect(value).toBeNaN();
    }
    for (const call of [
      () => chiSquareUpper(1, 0),
      () => chiSquareUpper(1, Infinity),
      () => fUpper(1, -1, 3),
      () => studentUpper(1, NaN),
      () => studentQuantile(1.1, 3),
      () => normalQuantile(NaN),
      () => gammaLower(0, 1),
      () => betaLower(1, 0, 0.5),
      () => logGamma(0),
      () => digamma(-1),
      () => noncentralChiSquareUpper(1, 2, -1),
    ]) {
      expect(call).toThrow(RangeError);
    }
  });

  test('a noncentrality of 0 is the central distribution', () => {
    expect(noncentralChiSquareUpper(5, 3, 0)).toBe(chiSquareUpper(5, 3));
  });

  test('a coverage factor is the two-sided quantile', () => {
    expectRelative(coverageFactor(0.95, 7.3), studentQuantile(0.975, 7.3), RELATIVE, []);
  });
});

describe('gamma and its derivatives', () => {
  test('log-gamma agrees with high-precision values', () => {
    for (const [x, value] of logGammaValues as [number, number][]) {
      expect(Math.abs(logGamma(x) - value), `at ${x}`).toBeLessThanOrEqual(ROUNDINGS * Math.max(1, Math.abs(value)));
    }
  });

  test('digamma and trigamma agree with high-precision values', () => {
    for (const [x, first, second] of polygammaValues as [number, number, number][]) {
      expect(Math.abs(digamma(x) - first), `at ${x}`).toBeLessThanOrEqual(ROUNDINGS * Math.max(1, Math.abs(first)));
      expectRelative(trigamma(x), second, ROUNDINGS, [x]);
    }
  });
});
