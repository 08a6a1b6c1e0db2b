import { describe, expect, test } from 'vitest';
import { scatterLadder } from '../../src/estimate/scatter-ladder.ts';
import { findPatterns } from '../../src/model/find-patterns.ts';
import { fUpper } from '../../src/numeric/f-distribution.ts';
import { randomStream } from '../../src/numeric/random.ts';
import { allPairs, bench, type Plan, simulatedLevels } from './ladder-bench.ts';

/** All inside the third-octave band at 1 kHz. */
const inOneBand = (count: number) => Array.from({ length: count }, (_, f) => 900 + (200 * f) / count);

function ladderOf({ set, model }: ReturnType<typeof bench>, options = {}) {
  return scatterLadder(set, model, findPatterns(set, model), options);
}

/** Two emitters, two receivers, two seatings a pair, two takes a seating: interaction ±1, seating ±0.5, repeat ±0.1 dB. */
function byHand(offset: (emitter: number, receiver: number) => number) {
  const plans: Plan[] = [];
  const levels: number[][] = [];
  for (const emitter of [0, 1]) {
    for (const receiver of [0, 1]) {
      for (const seating of [0, 1]) {
        for (const repeat of [0, 1]) {
          plans.push({ emitter, receiver, seating: `${seating}` });
          const interaction = emitter === receiver ? 1 : -1;
          levels.push([offset(emitter, receiver) + interaction + 0.5 * (2 * seating - 1) + 0.1 * (2 * repeat - 1)]);
        }
      }
    }
  }
  return bench(plans, levels, [1000], 'directional');
}

describe('a ladder by hand', () => {
  // Sums of squares: repeat 16 × 0.1² on 8, reseat 16 × 0.5² on 4, partner 16 × 1² on 1.
  const [step] = ladderOf(byHand(() => 0));

  test('standard deviations are those of the nested analysis of variance', () => {
    expect(step!.method).toBe('nested analysis of variance');
    expect(step!.repeat.sd).toBeCloseTo(Math.sqrt(0.02), 12);
    expect(step!.reseat.sd).toBeCloseTo(Math.sqrt((1 - 0.02) / 2), 12);
    expect(step!.partner.sd).toBeCloseTo(Math.sqrt((16 - 1) / 4), 12);
    expect(step!.repeat.dof).toBeCloseTo(8, 12);
    // Satterthwaite: (1 − 0.02)² / (1²/4 + 0.02²/8) and (16 − 1)² / (16²/1 + 1²/4).
    expect(step!.reseat.dof).toBeCloseTo(0.98 ** 2 / (0.25 + 0.02 ** 2 / 8), 12);
    expect(step!.partner.dof).toBeCloseTo(225 / 256.25, 12);
  });

  test('each step is held against the one below', () => {
    expect(step!.fReseat).toBeCloseTo(50, 9);
    expect(step!.pReseat).toBeCloseTo(fUpper(50, 4, 8), 12);
    expect(step!.fPartner).toBeCloseTo(16, 9);
    expect(step!.pPartner).toBeCloseTo(fUpper(16, 1, 4), 12);
    expect(step!.partnerAgainst).toBe('reseat');
    expect(step!.verdict).toBe('partner');
  });

  test('intervals hold the estimate, and reach down to 0 dB exactly where half the risk is not undercut', () => {
    for (const { sd, low, high } of [step!.repeat, step!.reseat, step!.partner]) {
      expect(low).toBeLessThan(sd);
      expect(high).toBeGreaterThan(sd);
    }
    expect(step!.pPartner).toBeLessThan(0.025);
    expect(step!.partner.low).toBeGreaterThan(0);
  });

  test("the units' responses have no say in it", () => {
    const [shifted] = ladderOf(byHand((emitter, receiver) => [-80, 35][emitter]! + [17, -123][receiver]!));
    // Rounding of levels near 100 dB: 1e-14 relative to the scatter's 0.1 dB, times the operations.
    expect(shifted!.repeat.sd).toBeCloseTo(step!.repeat.sd, 11);
    expect(shifted!.reseat.sd).toBeCloseTo(step!.reseat.sd, 11);
    expect(shifted!.partner.sd).toBeCloseTo(step!.partner.sd, 11);
    expect(shifted!.fPartner).toBeCloseTo(step!.fPartner, 8);
  });
});

describe('what the data cannot show is not testable, never 0', () => {
  const noise = (plans: readonly Plan[], seed = 1) =>
    simulatedLevels(randomStream(seed), plans, 4, { repeat: 0.1, reseat: 0.3, partner: 0 }, 0);
  const nothing = { sd: Number.NaN, dof: 0, low: Number.NaN, high: Number.NaN, includes: [] };

  test('every pair once: no step at all', () => {
    const plans = allPairs(
      5,
      () => 1,
      () => 1,
    );
    const [step] = ladderOf(bench(plans, noise(plans), inOneBand(4)));
    expect([step!.repeat, step!.reseat, step!.partner]).toEqual([nothing, nothing, nothing]);
    expect([step!.pReseat, step!.pPartner]).toEqual([Number.NaN, Number.NaN]);
    expect(step!.method).toBeUndefined();
    expect(step!.verdict).toBe('not testable');
  });

  test('repeats without reseating: what pairs differ by may be either, and is said to hold both', () => {
    const plans = allPairs(
      5,
      () => 1,
      () => 3,
    );
    const [step] = ladderOf(bench(plans, noise(plans), inOneBand(4)));
    expect(step!.reseat).toEqual(nothing);
    expect(step!.pReseat).toBeNaN();
    expect(step!.partner.includes).toEqual(['reseat']);
    expect(step!.partnerAgainst).toBe('repeat');
    expect(step!.verdict).toBe('reseat or partner');
  });

  test('reseating without repeats: the reseat step holds the repeat step', () => {
    const plans = allPairs(
      5,
      () => 3,
      () => 1,
    );
    const [step] = ladderOf(bench(plans, noise(plans), inOneBand(4)));
    expect(step!.repeat).toEqual(nothing);
    expect(step!.reseat.includes).toEqual(['repeat']);
    expect(step!.reseat.sd).toBeGreaterThan(0);
    expect(step!.pReseat).toBeNaN();
    expect(step!.partnerAgainst).toBe('reseat');
    expect(step!.pPartner).toBeGreaterThan(0);
  });

  test('a triangle has no partner step, since three pairs fix three units', () => {
    const plans = allPairs(
      3,
      () => 2,
      () => 2,
    );
    const [step] = ladderOf(bench(plans, noise(plans), inOneBand(4)));
    expect(step!.partner).toEqual(nothing);
    expect(step!.fPartner).toBeNaN();
    expect(step!.reseat.sd).toBeGreaterThan(0);
  });

  test('a band that nobody measured twice stays empty beside one that was', () => {
    const plans = allPairs(
      4,
      () => 2,
      () => 2,
    );
    const levels = simulatedLevels(randomStream(2), plans, 4, { repeat: 0.1, reseat: 0.3, partner: 0 }, 0);
    const seen = new Set<string>();
    plans.forEach((plan, t) => {
      const pair = `${plan.emitter} ${plan.receiver}`;
      if (seen.has(pair)) levels[t]!.fill(Number.NaN, 2);
      seen.add(pair);
    });
    const [first, second] = ladderOf(bench(plans, levels, [950, 1000, 2000, 2010]));
    expect(first!.reseat.sd).toBeGreaterThan(0);
    expect([second!.repeat, second!.reseat, second!.partner]).toEqual([nothing, nothing, nothing]);
  });
});

describe('what counts as a seating', () => {
  const pairOf = (plans: readonly Plan[], kind: 'reciprocal' | 'directional' = 'reciprocal') => {
    const levels = simulatedLevels(randomStream(4), plans, 1, { repeat: 1, reseat: 0, partner: 0 }, 0);
    return ladderOf(bench(plans, levels, [1000], kind))[0]!;
  };
  const both = [
    { emitter: 0, receiver: 1 },
    { emitter: 1, receiver: 0 },
  ];

  test('in the reciprocal model the two directions of a seating repeat each other, in the directional they are two pairs', () => {
    expect(pairOf(both).repeat.dof).toBeCloseTo(1, 12);
    expect(pairOf(both, 'directional').repeat.dof).toBe(0);
  });

  test('without labels a pair is mounted once in each session', () => {
    const sessions = ['morning', 'morning', 'noon', 'noon'].map((session) => ({ emitter: 0, receiver: 1, session }));
    const { repeat, reseat } = pairOf(sessions);
    expect(repeat.dof).toBeCloseTo(2, 12);
    expect(reseat.sd).not.toBeNaN();
  });

  test('labels tell seatings apart within a session, and keep one together across sessions', () => {
    const labelled = ['1', '1', '2'].map((seating) => ({ emitter: 0, receiver: 1, seating, session: 'morning' }));
    expect(pairOf(labelled).repeat.dof).toBeCloseTo(1, 12);
    const kept = ['morning', 'noon'].map((session) => ({ emitter: 0, receiver: 1, seating: '1', session }));
    expect(pairOf(kept).repeat.dof).toBeCloseTo(1, 12);
  });

  test('a gain that is unknown in each session has no say in the scatter', () => {
    const plans = allPairs(
      5,
      () => 2,
      () => 2,
    ).map((plan, t) => ({ ...plan, gain: t % 3 }));
    const levels = simulatedLevels(randomStream(8), plans, 3, { repeat: 0.1, reseat: 0.2, partner: 0.3 }, 0);
    const shifted = levels.map((row, t) => row.map((level) => level + [0, 7, -11][t % 3]!));
    const [plain] = ladderOf(bench(plans, levels, inOneBand(3)));
    const [moved] = ladderOf(bench(plans, shifted, inOneBand(3)));
    expect(plain!.method).toBe('restricted maximum likelihood');
    // Both climb until a step is below 1e-9 of the variance.
    expect(moved!.repeat.sd).toBeCloseTo(plain!.repeat.sd, 7);
    expect(moved!.reseat.sd).toBeCloseTo(plain!.reseat.sd, 7);
    expect(moved!.partner.sd).toBeCloseTo(plain!.partner.sd, 7);
    expect(moved!.fPartner).toBeCloseTo(plain!.fPartner, 8);
  });
});

test('takes that are left out might as well not be there', () => {
  const plans = allPairs(
    5,
    () => 2,
    () => 2,
  );
  const levels = simulatedLevels(randomStream(6), plans, 5, { repeat: 0.1, reseat: 0.2, partner: 0.1 }, 0);
  const spoiled = levels.map((row, t) => (t === 9 ? row.map((level) => level + 12) : row));
  const kept = plans.map((_, t) => t).filter((t) => t !== 9);
  const without = ladderOf(
    bench(
      kept.map((t) => plans[t]!),
      kept.map((t) => levels[t]!),
      inOneBand(5),
    ),
  );
  expect(ladderOf(bench(plans, spoiled, inOneBand(5)), { exclude: new Set([9]) })).toEqual(without);
});

test('a step that shows nothing is 0 dB with an upper bound', () => {
  const plans = allPairs(
    5,
    () => 2,
    () => 2,
  );
  const zero = Array.from({ length: 40 }, (_, seed) => {
    const levels = simulatedLevels(randomStream(seed), plans, 6, { repeat: 0.2, reseat: 0, partner: 0 }, 0);
    return ladderOf(bench(plans, levels, inOneBand(6)))[0]!.reseat;
  }).filter(({ sd }) => sd === 0);
  expect(zero.length).toBeGreaterThan(5);
  for (const { low, high, dof } of zero) {
    expect(low).toBe(0);
    expect(high).toBeGreaterThan(0.01);
    expect(dof).toBeGreaterThan(1);
  }
});

test('repeats that agree to the last digit: 0 dB, and whatever reseating changes stands out', () => {
  const plans = allPairs(
    4,
    () => 2,
    () => 2,
  );
  const seatingOnly = simulatedLevels(randomStream(3), plans, 2, { repeat: 0, reseat: 0.4, partner: 0 }, 0);
  const [step] = ladderOf(bench(plans, seatingOnly, inOneBand(2)));
  expect(step!.repeat.sd).toBe(0);
  expect([step!.fReseat, step!.pReseat]).toEqual([Number.POSITIVE_INFINITY, 0]);
  expect(step!.verdict).toBe('reseat');
});

/**
 * Simulation with known scatter that is smooth along frequency: 30 frequencies of a band are worth about 5 (width 3, the
 * hard case), while a test that took them for independent would alarm in one case of five.
 */
describe('in simulation', () => {
  const trials = 300;
  const count = 30;
  const equal = allPairs(
    5,
    () => 2,
    () => 2,
  );
  const unequal = allPairs(
    5,
    (pair) => 1 + (pair % 3),
    (pair, seating) => 1 + ((pair + seating) % 3),
  );
  const small = allPairs(
    4,
    () => 2,
    () => 2,
  );
  // Half of the pairs mounted three times and taken once each, the other half mounted once and taken four times.
  const lopsided = allPairs(
    6,
    (pair) => (pair % 2 === 0 ? 3 : 1),
    (pair) => (pair % 2 === 0 ? 1 : 4),
  );
  const run = (
    plans: readonly Plan[],
    scatter: { repeat: number; reseat: number; partner: number },
    white: boolean,
  ) => {
    const stream = randomStream(20, 1);
    return Array.from({ length: trials }, () => {
      const levels = simulatedLevels(stream, plans, count, scatter, 3, white);
      return ladderOf(bench(plans, levels, inOneBand(count)))[0]!;
    });
  };
  const share = (hits: readonly boolean[]) => hits.filter(Boolean).length / hits.length;
  /** Four sampling errors of a proportion. */
  const margin = (p: number) => 4 * Math.sqrt((p * (1 - p)) / trials);

  test.each([
    ['equal groups', equal],
    ['unequal groups', unequal],
    ['lopsided groups', lopsided],
    ['four units', small],
  ] as const)('%s: the partner test alarms at its level where there is reseat scatter only', (_, plans) => {
    const alarms = share(
      run(plans, { repeat: 0.2, reseat: 0.3, partner: 0 }, true).map((step) => step.pPartner < 0.05),
    );
    expect(alarms).toBeLessThan(0.05 + margin(0.05));
    expect(alarms).toBeGreaterThan(0);
  });

  test('the reseat test alarms at its level where there is repeat noise only', () => {
    const alarms = share(run(equal, { repeat: 0.2, reseat: 0, partner: 0 }, false).map((step) => step.pReseat < 0.05));
    expect(alarms).toBeLessThan(0.05 + margin(0.05));
    expect(alarms).toBeGreaterThan(0);
  });

  test.each([
    ['equal groups', equal],
    ['unequal groups', unequal],
  ] as const)('%s: variances are unbiased, intervals cover, and what is there is found', (_, plans) => {
    const truth = { repeat: 0.2, reseat: 0.3, partner: 0.5 };
    const steps = run(plans, truth, true);
    for (const name of ['repeat', 'reseat', 'partner'] as const) {
      const squares = steps.map((step) => step[name].sd ** 2);
      const mean = squares.reduce((sum, value) => sum + value, 0) / trials;
      const error = Math.sqrt(squares.reduce((sum, value) => sum + (value - mean) ** 2, 0) / trials / (trials - 1));
      expect(Math.abs(mean - truth[name] ** 2), name).toBeLessThan(4 * error);
      const covered = share(steps.map((step) => step[name].low <= truth[name] && truth[name] <= step[name].high));
      expect(covered, name).toBeGreaterThan(0.95 - margin(0.95));
    }
    expect(share(steps.map((step) => step.verdict === 'partner'))).toBeGreaterThan(0.95);
  });
});
