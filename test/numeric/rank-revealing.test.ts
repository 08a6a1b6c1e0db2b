import { describe, expect, it } from 'vitest';
import { inverseNormalMatrix, RankError } from '../../src/numeric/rank-revealing.ts';

describe('inverse of XᵀX by singular values', () => {
  it('of whole numbers, by hand', () => {
    // XᵀX = [[2, 1], [1, 2]], inverse [[2, −1], [−1, 2]] / 3.
    const inverse = inverseNormalMatrix([
      [1, 0],
      [0, 1],
      [1, 1],
    ]);
    [2 / 3, -1 / 3, -1 / 3, 2 / 3].forEach((entry, k) => {
      expect(inverse[k]).toBeCloseTo(entry, 14);
    });
  });

  it.each([1e-3, 1e-6, 1e-7])('keeps its digits where the triangle’s third row weighs %d of the others', (weight) => {
    // H1 = (L12 + L13 − L23)/2 whatever the weights: all variances (2 + 1/w²)/4.
    const inverse = inverseNormalMatrix([
      [1, 1, 0],
      [1, 0, 1],
      [0, weight, weight],
    ]);
    for (const k of [0, 4, 8]) expect(Math.abs(inverse[k]! / ((2 + weight ** -2) / 4) - 1)).toBeLessThan(1e-7);
  });

  it('is not disturbed by the scale of a column', () => {
    const inverse = inverseNormalMatrix([
      [1e8, 0],
      [0, 1e-8],
      [1e8, 1e-8],
    ]);
    expect(inverse[0]! * 1e16).toBeCloseTo(2 / 3, 12);
    expect(inverse[3]! * 1e-16).toBeCloseTo(2 / 3, 12);
  });

  it.each([
    [
      'an even ring',
      [
        [1, 1, 0, 0],
        [0, 1, 1, 0],
        [0, 0, 1, 1],
        [1, 0, 0, 1],
      ],
      3,
    ],
    [
      'a column of zeros',
      [
        [1, 0],
        [1, 0],
      ],
      1,
    ],
    ['fewer rows than columns', [[1, 1]], 1],
  ])('throws where the rank is not full, and tells it: %s', (_, design, rank) => {
    expect(() => inverseNormalMatrix(design)).toThrow(RankError);
    expect(() => inverseNormalMatrix(design)).toThrow(`rank ${rank} of ${design[0]!.length}`);
  });
});
