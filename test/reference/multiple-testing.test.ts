/** Published examples of adjusted p values; the source stands with each test. */
import { expect, test } from 'vitest';
import { benjaminiHochbergAdjusted, holmAdjusted } from '../../src/numeric/multiple-testing.ts';

function expectAll(values: readonly number[], expected: readonly number[], tolerance: number): void {
  expect(values.length).toBe(expected.length);
  expected.forEach((value, i) => {
    expect(Math.abs(values[i]! - value), `entry ${i + 1}`).toBeLessThan(tolerance);
  });
}

const rejected = (adjusted: readonly number[]) => adjusted.filter((p) => p <= 0.05).length;

/** Source: Y. Benjamini & Y. Hochberg 1995, J. R. Statist. Soc. B 57, 289–300 (15 p values; adjusted values recomputed). */
test('fifteen p values: four rejections by Benjamini and Hochberg, three by Holm', () => {
  const tolerance = 1e-8;
  const p = [
    0.0001, 0.0004, 0.0019, 0.0095, 0.0201, 0.0278, 0.0298, 0.0344, 0.0459, 0.324, 0.4262, 0.5719, 0.6528, 0.759, 1,
  ];
  const stepUp = [
    0.0015, 0.003, 0.0095, 0.035625, 0.0603, 0.06385714, 0.06385714, 0.0645, 0.0765, 0.486, 0.58118182, 0.714875,
    0.75323077, 0.81321429, 1,
  ];
  const stepDown = [0.0015, 0.0056, 0.0247, 0.114, 0.2211, 0.278, 0.278, 0.278, 0.3213, 1, 1, 1, 1, 1, 1];
  expectAll(benjaminiHochbergAdjusted(p), stepUp, tolerance);
  expectAll(holmAdjusted(p), stepDown, tolerance);
  expect([rejected(benjaminiHochbergAdjusted(p)), rejected(holmAdjusted(p))]).toEqual([4, 3]);
  // The order of the tests does not matter.
  expectAll(benjaminiHochbergAdjusted([...p].reverse()), [...stepUp].reverse(), tolerance);
  expectAll(holmAdjusted([...p].reverse()), [...stepDown].reverse(), tolerance);
});

/** Source: Brit. J. Math. Stat. Psychol. (2013), doi 10.1111/j.2044-8317.2012.02042.x, appendix A (recomputed). */
test('five p values, the fourth exactly on the limit: it counts as rejected', () => {
  const p = [0.009, 0.015, 0.025, 0.04, 0.2];
  expectAll(holmAdjusted(p), [0.045, 0.06, 0.075, 0.08, 0.2], 1e-9);
  expectAll(benjaminiHochbergAdjusted(p), [0.0375, 0.0375, 0.0416666667, 0.05, 0.2], 1e-9);
  expect([rejected(holmAdjusted(p)), rejected(benjaminiHochbergAdjusted(p))]).toEqual([1, 4]);
});
