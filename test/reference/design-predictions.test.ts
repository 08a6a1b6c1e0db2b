/**
 * What designs of unit variance are known to give, by formula: checked against the prediction, which sees no data.
 * The same designs go through the solver in designs-command.test.ts.
 */
import { describe, expect, it, test } from 'vitest';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { detectability } from '../../src/numeric/detectability.ts';
import { DEFAULT_TIMES } from '../../src/whatif/costs.ts';
import type { Design } from '../../src/whatif/design.ts';
import { namedUnits, patternDesign } from '../../src/whatif/patterns.ts';
import { type BandPrediction, predict } from '../../src/whatif/predict.ts';
import { inverseOf } from '../whatif/dense-matrix.ts';
import { completeGraph, designOfGraph, type Graph, ringGraph, UNIT_VARIANCE } from '../whatif/designs-made.ts';

/** Of the published table. */
const TABLE = 1e-9;
/** Of detectable shifts: the table's digits, which the ridge of the closed form does not reach. */
const DIGITS = 1e-5;

/** In the sum model, which the published variances are of. */
const RECIPROCAL = { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' as const };

async function of(design: Design): Promise<BandPrediction> {
  return (await predict(design, [UNIT_VARIANCE], { times: DEFAULT_TIMES, model: RECIPROCAL })).bands[0]!;
}
const ofGraph = (units: number, graph: Graph) => of(designOfGraph(units, graph));
const variances = ({ units }: BandPrediction) => units.map(({ asSeated }) => asSeated ** 2);
const expectNear = (found: readonly number[], wanted: readonly number[], tolerance: number) => {
  expect(found).toHaveLength(wanted.length);
  found.forEach((value, k) => {
    expect(Math.abs(value - wanted[k]!)).toBeLessThan(tolerance);
  });
};

/**
 * Derived from X'X = (n-2) I + J; the triangle is the spring-balance optimum of A. M. Mood (1946), Ann. Math. Statist. 17,
 * 432-446, for three objects; agrees with B. Griffing (1956), method 4. Detectable shifts for risk 0.1 % and power 80 %.
 */
describe('complete sets', () => {
  test.each([
    [3, 0.75, 2, 0, Number.NaN],
    [4, 0.416666667, 1, 0.333333, 7.15709],
    [5, 0.291666667, 0.666666667, 0.5, 5.84374],
    [6, 0.225, 0.5, 0.6, 5.33458],
    [7, 0.183333333, 0.4, 0.666667, 5.06083],
    [8, 0.154761905, 0.333333333, 0.714286, 4.88922],
    [9, 0.133928571, 0.285714286, 0.75, 4.77139],
    [10, 0.118055556, 0.25, 0.777778, 4.68542],
  ])(
    '%d units: var(H) %d, variance of a difference %d, redundancy %d, detectable %d',
    async (n, own, difference, r, mde) => {
      const band = await of(patternDesign(namedUnits(n), 'all', { seatings: 1, repeats: 1 }));
      expectNear(variances(band), Array(n).fill((2 * n - 3) / (2 * (n - 1) * (n - 2))), TABLE);
      expectNear([variances(band)[0]!], [own], TABLE);
      expectNear([band.differences.mean ** 2, band.differences.worst ** 2], [difference, difference], TABLE);
      expect(band.takes).toHaveLength((n * (n - 1)) / 2);
      for (const { redundancy, smallestShift } of band.takes) {
        expect(Math.abs(redundancy - r)).toBeLessThan(5e-7);
        if (n === 3) expect(smallestShift).toBeNaN();
        else expect(Math.abs(smallestShift - mde)).toBeLessThan(DIGITS);
      }
    },
  );

  // The closed form that model.md, section 8, is held to: var(H)/σ² = (2n−3)/(2(n−1)(n−2)).
  it('of many units follow the formula as well', async () => {
    const n = 40;
    const band = await of(patternDesign(namedUnits(n), 'all', { seatings: 1, repeats: 1 }));
    expectNear(variances(band), Array(n).fill((2 * n - 3) / (2 * (n - 1) * (n - 2))), TABLE);
  });

  it('of both directions, reciprocal, halve every variance', async () => {
    const band = await of(patternDesign(namedUnits(6), 'both-ways', { seatings: 1, repeats: 1 }));
    expectNear(variances(band), Array(6).fill(0.225 / 2), TABLE);
  });

  /**
   * D. A. Kenny, "The mathematics of the Social Relations Model": closed form of a round robin, Warner, Kenny and Stoto
   * (1979), J. Pers. Soc. Psychol. 37, 1742-1757; redundancy 19/30 for every observation of six units.
   */
  it('of both directions, directional, have the redundancy of a round robin', async () => {
    const model = { ...DEFAULT_MODEL_OPTIONS, model: 'directional' as const };
    const design = patternDesign(namedUnits(6), 'both-ways', { seatings: 1, repeats: 1 });
    const { takes } = (await predict(design, [UNIT_VARIANCE], { times: DEFAULT_TIMES, model })).bands[0]!;
    for (const { redundancy } of takes) expect(Math.abs(redundancy - 19 / 30)).toBeLessThan(TABLE);
  });
});

/** Derived: a ring of n (odd) pairs has var(H) = n/4 and no redundancy; an even ring is not solvable. */
describe('rings', () => {
  test.each([3, 5, 7, 9])('of %d units: n/4, and nothing spare', async (n) => {
    const band = await of(patternDesign(namedUnits(n), 'ring', { seatings: 1, repeats: 1 }));
    expectNear(variances(band), Array(n).fill(n / 4), TABLE);
    for (const { redundancy, smallestShift } of band.takes) {
      expect(redundancy).toBe(0);
      expect(smallestShift).toBeNaN();
    }
  });

  // Derived: one closed condition of n pairs has redundancy 1/n each, and a detectable shift of δ0 √n.
  test.each([
    [4, 8.264296],
    [6, 4.132148 * Math.sqrt(6)],
  ])('of %d units leave all open, with redundancy 1/n and a detectable shift of %d', async (n, shift) => {
    const band = await of(patternDesign(namedUnits(n), 'ring', { seatings: 1, repeats: 1 }));
    expect(band.units.every(({ status }) => status === 'open')).toBe(true);
    for (const { redundancy, smallestShift } of band.takes) {
      expect(Math.abs(redundancy - 1 / n)).toBeLessThan(TABLE);
      expect(Math.abs(smallestShift - shift)).toBeLessThan(DIGITS);
    }
  });
});

/** W. Baarda (1968), A testing procedure for use in geodetic networks (recalled from memory): 17.07 and 4.13. */
test.each([
  [0.05, 0.8, 2.801585],
  [0.01, 0.8, 3.417451],
  [0.001, 0.8, 4.132148],
  [0.001, 0.9, 4.572078],
  [0.05, 0.9, 3.241516],
])('detectability at risk %d and power %d is %d', (risk, power, delta) => {
  expect(Math.abs(detectability(risk, power) - delta)).toBeLessThan(DIGITS);
});

/** Derived: rank of emitters and receivers is 2n less the connected parts of their two-sided graph: one datum a part. */
test('all ordered pairs of four units leave one constant to a datum, in the directional model', async () => {
  const model = { ...DEFAULT_MODEL_OPTIONS, model: 'directional' as const };
  const design = patternDesign(namedUnits(4), 'both-ways', { seatings: 1, repeats: 1 });
  const { bench, bands } = await predict(design, [UNIT_VARIANCE], { times: DEFAULT_TIMES, model });
  expect(bench.patterns.patterns[0]!.separability.rank).toBe(2 * 4 - 1);
  expect(bands[0]!.units.map(({ status }) => status)).toEqual(Array(8).fill('datum'));
});

/** D. Cvetković, P. Rowlinson, S. Simić (2007), Linear Algebra Appl. 423, 155-171: open are the bipartite parts. */
describe('what is told apart', () => {
  const path = (n: number): Graph => Array.from({ length: n - 1 }, (_, i) => [i, i + 1] as const);
  const sides: Graph = [0, 1, 2].flatMap((a) => [3, 4, 5].map((b) => [a, b] as const));
  test.each([
    ['a path of four', 4, path(4), 4],
    ['a ring of four', 4, ringGraph(4), 4],
    ['two sides of three', 6, sides, 6],
    ['a triangle and a separate pair', 5, [...completeGraph(3), [3, 4] as const], 2],
    ['a triangle with a tail', 4, [...completeGraph(3), [2, 3] as const], 0],
    ['two triangles', 6, [...ringGraph(3), ...ringGraph(3, 3)], 0],
    ['a ring of five and a separate one of four', 9, [...ringGraph(5), ...ringGraph(4, 5)], 4],
  ] as const)('%s', async (_, units, graph, open) => {
    const band = await ofGraph(units, graph);
    expect(band.units.filter(({ status }) => status === 'open')).toHaveLength(open);
  });
});

/** Derived: a triangle has 0.75 each, and each link of a tail adds 1; a star with one closing pair likewise. */
describe('tails and stars', () => {
  it('a triangle with a tail of four', async () => {
    const tail: Graph = [...completeGraph(3), [2, 3], [3, 4], [4, 5], [5, 6]];
    expectNear(variances(await ofGraph(7, tail)), [0.75, 0.75, 0.75, 1.75, 2.75, 3.75, 4.75], TABLE);
  });

  test.each([
    [4, 4.0],
    [5, 5.75],
    [6, 7.5],
  ])('a hub of %d units: 0.75 for the triangle, 1.75 for the rest, trace %d', async (n, trace) => {
    const found = variances(await of(patternDesign(namedUnits(n), 'hub', { seatings: 1, repeats: 1 })));
    expectNear(found, [0.75, 0.75, 0.75, ...Array(n - 3).fill(1.75)], TABLE);
    expectNear([found.reduce((sum, value) => sum + value, 0)], [trace], TABLE);
  });
});

/** Derived by enumerating all simple graphs on four vertices. */
describe('best sets for four units', () => {
  const pairs = completeGraph(4);
  const subsets = (size: number) =>
    Array.from({ length: 64 }, (_, bits) => pairs.filter((__, k) => (bits >> k) & 1)).filter(
      ({ length }) => length === size,
    );
  test.each([
    [4, 15, 3, 4.0, 4],
    [5, 6, 0, 2.5, 16],
    [6, 1, 0, 5 / 3, 48],
  ])(
    '%d pairs: of %d sets %d are not solvable, smallest trace %d, largest determinant %d',
    async (size, all, open, trace, det) => {
      const sets = subsets(size);
      expect(sets).toHaveLength(all);
      let [unsolvable, least, most] = [0, Number.POSITIVE_INFINITY, 0];
      for (const graph of sets) {
        const band = await ofGraph(4, graph);
        if (band.units.some(({ status }) => status === 'open')) unsolvable++;
        else {
          least = Math.min(
            least,
            variances(band).reduce((sum, value) => sum + value, 0),
          );
          most = Math.max(most, 1 / determinant(band, 4));
        }
      }
      expect(unsolvable).toBe(open);
      expectNear([least, most], [trace, det], 1e-8);
    },
  );

  /**
   * OEIS A003432 (largest determinants of 0/1 matrices): for order 3 the triangle reaches the maximum 2; a saturated set of
   * n pairs has |det X| = 2^c with c odd-ring components. Mood's asymptotic result: variance of order 4 σ²/N.
   */
  it('saturated sets have det X = 2 to the number of odd rings', async () => {
    for (const [units, graph, rings] of [
      [3, ringGraph(3), 1],
      [5, ringGraph(5), 1],
      [6, [...ringGraph(3), ...ringGraph(3, 3)], 2],
      [4, [...ringGraph(3), [2, 3]], 1],
    ] as const) {
      const det = 1 / Math.sqrt(determinant(await ofGraph(units, graph), units));
      expect(Math.abs(det - 2 ** rings)).toBeLessThan(1e-8);
    }
  });
});

/** Of the covariance matrix, by the pivots of its inverse. */
function determinant({ covariance }: BandPrediction, n: number): number {
  const rows = Array.from({ length: n }, (_, i) => Array.from(covariance.covariance.subarray(i * n, i * n + n)));
  // det = Π 1/(lower-right corner of the inverse of each leading part).
  let det = 1;
  for (let size = 1; size <= n; size++) {
    const part = inverseOf(rows.slice(0, size).map((row) => row.slice(0, size)));
    det /= part[size - 1]![size - 1]!;
  }
  return det;
}
