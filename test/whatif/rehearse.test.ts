import { describe, expect, it } from 'vitest';
import { asMounted } from '../../src/whatif/as-mounted.ts';
import { orderSeatings } from '../../src/whatif/order.ts';
import { namedUnits, patternDesign } from '../../src/whatif/patterns.ts';
import { rehearse } from '../../src/whatif/rehearse.ts';
import { designOf, ladder } from './designs-made.ts';

const BASE = { runs: 40, seed: 5, coverage: 0.95, fault: 3 };
const design = patternDesign(namedUnits(6), 'all', { seatings: 2, repeats: 2 });
const BAND = ladder(0.1, 0.5, 0.3);
/** The solver weighs by scatter that it has to learn: a few per cent above the best possible, and never below it but by chance. */
const LEARNING = 0.05;
/** Sampling errors that a test allows. */
const MANY = 4;

describe('rehearse', () => {
  it('sees the predicted uncertainty and the stated coverage, and finds a gross fault', async () => {
    const { predicted, seen, stated, covered, chance, planted, found } = await rehearse(design, [BAND], BASE);
    expect(Math.abs(seen / predicted - 1)).toBeLessThan(LEARNING + MANY * chance);
    expect(Math.abs(stated / predicted - 1)).toBeLessThan(LEARNING + MANY * chance);
    // 40 runs × 12 frequencies, units of one run together counted as one.
    expect(Math.abs(covered - 0.95)).toBeLessThan(MANY * Math.sqrt((0.95 * 0.05) / (40 * 12)));
    expect(planted).toBe(40);
    expect(found).toBeGreaterThan(32);
  });

  it('sees the larger uncertainty of a sheet in which units stay mounted', async () => {
    const fresh = patternDesign(namedUnits(6), 'all', { seatings: 3, repeats: 2 });
    const sheet = { ...fresh, seatings: asMounted(orderSeatings(fresh.seatings, 1).seatings, new Map()) };
    const band = ladder(0.1, 0.5, 0);
    const one = await rehearse(fresh, [band], { ...BASE, runs: 1 });
    const other = await rehearse(sheet, [band], { ...BASE, runs: 25 });
    expect(other.predicted).toBeGreaterThan(one.predicted);
    expect(Math.abs(other.seen / other.predicted - 1)).toBeLessThan(LEARNING + MANY * other.chance);
  });

  it('is the same for the same seed, and another one for another', async () => {
    const short = { ...BASE, runs: 2 };
    const one = await rehearse(design, [BAND], short);
    expect(await rehearse(design, [BAND], short)).toEqual(one);
    expect((await rehearse(design, [BAND], { ...short, seed: 6 })).seen).not.toBe(one.seen);
  });

  it('plants nothing where nothing checks a take, and says nothing of open units', async () => {
    const { planted, units } = await rehearse(designOf('A>B', 'B>C', 'A>C', 'D>E'), [BAND], { ...BASE, runs: 1 });
    expect(planted).toBe(0);
    expect(units.map(({ seen }) => Number.isNaN(seen))).toEqual([false, false, false, true, true]);
  });
});
