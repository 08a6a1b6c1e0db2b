import { expect, test } from 'vitest';
import { benjaminiHochbergAdjusted, holmAdjusted } from '../../src/numeric/multiple-testing.ts';

test('one test is left as it is, none gives none', () => {
  for (const adjust of [holmAdjusted, benjaminiHochbergAdjusted]) {
    expect(adjust([0.03])).toEqual([0.03]);
    expect(adjust([])).toEqual([]);
  }
});

test('what was not tested stays NaN and does not count', () => {
  expect(holmAdjusted([NaN, 0.25, 0.03125])).toEqual([NaN, 0.25, 0.0625]);
  expect(benjaminiHochbergAdjusted([0.25, NaN, 0.03125])).toEqual([0.25, NaN, 0.0625]);
});

test('adjusted values never pass 1 and keep the order of the given ones', () => {
  const p = [0.9, 0.8, 0.01, 0.7];
  expect(holmAdjusted(p)).toEqual([1, 1, 0.04, 1]);
  const adjusted = benjaminiHochbergAdjusted(p);
  [0.9, 0.9, 0.04, 0.9].forEach((value, i) => {
    expect(adjusted[i]).toBeCloseTo(value, 15);
  });
});
