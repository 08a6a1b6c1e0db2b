import { expect, test } from 'vitest';
import { figureCell, frequencyCell, levelCell } from '../../src/report/number-text.ts';

test('levels have six decimals, and a rounded zero has no sign', () => {
  expect([1 / 3, -12.5, -4e-7, 4e-7, 0, -0].map((value) => levelCell(value))).toEqual([
    '0.333333',
    '-12.500000',
    '0.000000',
    '0.000000',
    '0.000000',
    '0.000000',
  ]);
  expect(levelCell(-6e-7)).toBe('-0.000001');
});

test('what is not available is an empty cell, and a level is never infinite', () => {
  expect([levelCell(Number.NaN), figureCell(Number.NaN)]).toEqual(['', '']);
  expect(() => levelCell(Number.POSITIVE_INFINITY)).toThrow(RangeError);
});

test('figures have six significant digits without trailing zeros', () => {
  const values = [0.3, 1 / 3, 12, 100000, 1234567, 1.5e-7, 0, -0, 1e-10 / 3, Number.POSITIVE_INFINITY];
  expect(values.map(figureCell)).toEqual([
    '0.3',
    '0.333333',
    '12',
    '100000',
    '1234570',
    '1.5e-7',
    '0',
    '0',
    '3.33333e-11',
    'inf',
  ]);
});

test('frequencies are in their shortest form, without what unit conversion left in the last bits', () => {
  expect([1000, 31500, 0.1 * 3 * 1000, 1258.9254117941673, 2.5e6].map(frequencyCell)).toEqual([
    '1000',
    '31500',
    '300',
    '1258.92541179',
    '2500000',
  ]);
});
