import { describe, expect, it } from 'vitest';
import { rankOf } from '../../src/numeric/dense.ts';
import { nullSpace } from '../../src/numeric/null-space.ts';
import { randomStream } from '../../src/numeric/random.ts';

const basisOf = (rows: readonly (readonly number[])[], columns: number) =>
  nullSpace(
    rows.map((row) => Float64Array.from(row)),
    columns,
  ).map((vector) => [...vector]);

describe('null space of incidences', () => {
  it('of a pair of units is +1, −1; of a triangle it is empty; of an even ring it alternates', () => {
    expect(basisOf([[1, 1]], 2)).toEqual([[-1, 1]]);
    expect(
      basisOf(
        [
          [1, 1, 0],
          [0, 1, 1],
          [1, 0, 1],
        ],
        3,
      ),
    ).toEqual([]);
    expect(
      basisOf(
        [
          [1, 1, 0, 0],
          [0, 1, 1, 0],
          [0, 0, 1, 1],
          [1, 0, 0, 1],
        ],
        4,
      ),
    ).toEqual([[-1, 1, -1, 1]]);
  });

  it('without rows is everything, one unit vector a column; without columns it is empty', () => {
    expect(basisOf([], 2)).toEqual([
      [1, 0],
      [0, 1],
    ]);
    expect(basisOf([[0, 0]], 2)).toHaveLength(2);
    expect(basisOf([], 0)).toEqual([]);
  });

  it('counts as many vectors as columns less the rank, and every row sends each to 0: random whole numbers', () => {
    const random = randomStream(3);
    for (let run = 0; run < 200; run++) {
      const columns = 1 + random.below(7);
      const rows = Array.from({ length: 1 + random.below(8) }, () =>
        Array.from({ length: columns }, () => random.below(4) - 1),
      );
      const basis = basisOf(rows, columns);
      expect(basis).toHaveLength(columns - rankOf(rows));
      // Entries are small fractions: sums of at most seven of them.
      for (const row of rows) {
        for (const vector of basis) {
          expect(Math.abs(row.reduce((sum, x, c) => sum + x * vector[c]!, 0))).toBeLessThan(1e-12);
        }
      }
    }
  });
});
