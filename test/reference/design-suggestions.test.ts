/** Suggestions against sets that are known to be best. */
import { describe, expect, it, test } from 'vitest';
import { DEFAULT_TIMES } from '../../src/whatif/costs.ts';
import { emptyDesign, namedUnits } from '../../src/whatif/patterns.ts';
import { predict } from '../../src/whatif/predict.ts';
import { suggestTakes } from '../../src/whatif/suggest.ts';
import { UNIT_VARIANCE } from '../whatif/designs-made.ts';

const suggested = (units: number, add: number) =>
  suggestTakes(emptyDesign(namedUnits(units)), UNIT_VARIANCE, {
    add,
    criterion: 'mean',
    again: false,
    repeats: 1,
    seed: 1,
  })!;

/** Derived by enumerating all simple graphs on four vertices: smallest trace 4.0, 2.5 and 5/3 for four, five and six pairs. */
test.each([
  [4, 4.0],
  [5, 2.5],
  [6, 5 / 3],
])('the best %d pairs of four units have trace %d', async (pairs, trace) => {
  const { design } = suggested(4, pairs);
  const { units } = (await predict(design, [UNIT_VARIANCE], { times: DEFAULT_TIMES })).bands[0]!;
  expect(Math.abs(units.reduce((sum, { asSeated }) => sum + asSeated ** 2, 0) - trace)).toBeLessThan(1e-9);
});

/** A. M. Mood (1946), Ann. Math. Statist. 17, 432-446: three objects on a spring balance are best weighed two by two. */
describe('the spring-balance optimum', () => {
  it('for three units is the triangle, with a variance of 3/4 each', async () => {
    const { design } = suggested(3, 3);
    expect(design.seatings.map((s) => s.emitter + s.receiver).sort()).toEqual(['S1S2', 'S1S3', 'S2S3']);
    const { units } = (await predict(design, [UNIT_VARIANCE], { times: DEFAULT_TIMES })).bands[0]!;
    for (const { asSeated } of units) expect(Math.abs(asSeated ** 2 - 0.75)).toBeLessThan(1e-9);
  });

  it('for six units and six pairs is two triangles, not one ring', () => {
    const { design, isExhaustive } = suggested(6, 6);
    expect(isExhaustive).toBe(true);
    const partners = new Map<string, Set<string>>();
    for (const { emitter, receiver } of design.seatings) {
      partners.set(emitter, (partners.get(emitter) ?? new Set([emitter])).add(receiver));
      partners.set(receiver, (partners.get(receiver) ?? new Set([receiver])).add(emitter));
    }
    expect(new Set([...partners.values()].map((set) => [...set].sort().join())).size).toBe(2);
  });
});
