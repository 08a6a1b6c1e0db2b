import { expect, test } from 'vitest';
import { effectiveDof } from '../../src/numeric/effective-dof.ts';

test('one part keeps its own degrees of freedom, two equal parts double them', () => {
  expect(effectiveDof([{ u: 0.3, dof: 7 }])).toBeCloseTo(7, 12);
  expect(
    effectiveDof([
      { u: 0.3, dof: 7 },
      { u: 0.3, dof: 7 },
    ]),
  ).toBeCloseTo(14, 12);
});

test('parts that are known exactly, and parts of 0, take nothing away', () => {
  expect(
    effectiveDof([
      { u: 0.3, dof: Infinity },
      { u: 0, dof: 1 },
    ]),
  ).toBe(Infinity);
  expect(effectiveDof([{ u: 0, dof: 3 }])).toBe(Infinity);
  expect(effectiveDof([])).toBe(Infinity);
  expect(
    effectiveDof([
      { u: 1, dof: 4 },
      { u: 1, dof: Infinity },
    ]),
  ).toBeCloseTo(16, 12);
});

test('a negative u and degrees of freedom of 0 are refused', () => {
  expect(() => effectiveDof([{ u: -1, dof: 3 }])).toThrow(RangeError);
  expect(() => effectiveDof([{ u: 1, dof: 0 }])).toThrow(RangeError);
});
