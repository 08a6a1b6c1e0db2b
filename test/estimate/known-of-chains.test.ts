import { describe, expect, it } from 'vitest';
import { knownOfChains } from '../../src/estimate/known-of-chains.ts';
import { solve } from '../../src/estimate/solve.ts';
import { startingLevels } from '../../src/findings/screening-levels.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { choleskyInPlace, choleskyInverse } from '../../src/numeric/cholesky.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';

async function levelOf(mounted: 'for each pair' | 'for each round') {
  const { set } = simulatePairs({
    seed: 4,
    units: 6,
    seatings: 3,
    repeats: 2,
    mounted,
    repeatScatter: 0.1,
    reseatScatter: 0.5,
    frequencies: logSpaced(6, 10_000, 11_000),
  });
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  const { layout, bands, links } = startingLevels(set, model, await solve(set, model));
  return { layout, links, level: bands[0]!.scatter };
}

/** Two ways to the same sum of products of numbers near 1, and a ridge of 1e-9 in one of them. */
const TOLERANCE = 1e-6;

describe('what seatings and repeats explain of a chain’s mean', () => {
  it('is its whole variance where every pair is seated for itself', async () => {
    const { layout, level } = await levelOf('for each pair');
    const known = knownOfChains(layout, level.fitted, level.seating);
    known.forEach((variance, chain) => {
      expect(variance).toBe(1 / level.fitted.chainPrecision[chain]!);
    });
  });

  it('is what the fit of the units leaves where units stay seated for a round, by dense matrices', async () => {
    const { layout, links: n, level } = await levelOf('for each round');
    const { fitted, seating } = level;
    const known = knownOfChains(layout, fitted, seating);
    const count = layout.groups.length;
    const design = layout.groups.map(({ links, factors }) => {
      const row = new Float64Array(n);
      links.forEach((link, k) => {
        row[link] = factors[k]!;
      });
      return row;
    });
    const normal = new Float64Array(n * n);
    design.forEach((row, c) => {
      for (let i = 0; i < n; i++)
        for (let j = 0; j < n; j++) normal[i * n + j]! += fitted.chainWeight[c]! * row[i]! * row[j]!;
    });
    const inverse = new Float64Array(n * n);
    expect(choleskyInPlace(normal, n)).toBe(true);
    choleskyInverse(normal, n, inverse, new Float64Array(n * n));
    const hat = (c: number, d: number) => {
      let sum = 0;
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) sum += design[c]![i]! * inverse[i * n + j]! * design[d]![j]!;
      }
      return sum * fitted.chainWeight[d]!;
    };
    for (let c = 0; c < count; c++) {
      let shared = 0;
      layout.shared.seatings.forEach(({ response }, s) => {
        let rest = 0;
        for (let d = 0; d < count; d++) {
          let part = 0;
          for (let seat = layout.seatStart[d]!; seat < layout.seatStart[d + 1]!; seat++) {
            if (!layout.shared.ofTake[layout.takes[seat]![0]!]!.includes(s)) continue;
            part += fitted.seatPrecision[seat]! / fitted.chainPrecision[d]!;
          }
          rest += ((c === d ? 1 : 0) - hat(c, d)) * part;
        }
        shared += seating!.shares[response]! * rest * rest;
      });
      // All three seatings alike: the repeats' part is what is left of the mean's variance without the seatings'.
      const repeats = 1 / fitted.chainPrecision[c]! - fitted.seatVariance[c]! / 3;
      const expected = repeats + shared / (1 - hat(c, c));
      expect(Math.abs(known[c]! / expected - 1)).toBeLessThan(TOLERANCE);
      // Once a round all pairs are taken, so that the units take up all of it.
      expect(known[c]!).toBeLessThan(0.1 / fitted.chainPrecision[c]!);
    }
  });
});
