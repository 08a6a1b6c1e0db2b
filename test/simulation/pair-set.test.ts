import { expect, test } from 'vitest';
import { repeatGroups } from '../../src/takes/repeats.ts';
import type { Take, TakeSet } from '../../src/takes/take-set.ts';
import { logSpaced, simulatePairs } from './pair-set.ts';
import type { PlantedFault } from './planted-faults.ts';

/** A scatter that n independent deviations tell is known to 1 / √(2n); beyond 4 of these nothing falls by chance. */
const tolerance = (independent: number) => 4 / Math.sqrt(2 * independent);
/** Rounding of levels below 100 dB, a dozen operations. */
const ROUNDING = 100 * 12 * Number.EPSILON;

test('the same seed gives the same set, another seed another one', () => {
  const options = { units: 4, repeatScatter: 0.1, reseatScatter: 0.3, partnerScatter: 0.1 };
  expect(simulatePairs({ ...options, seed: 7 })).toEqual(simulatePairs({ ...options, seed: 7 }));
  expect(simulatePairs({ ...options, seed: 7 }).set.levels).not.toEqual(
    simulatePairs({ ...options, seed: 8 }).set.levels,
  );
});

test('without scatter a reciprocal level is the sum of two true responses, whichever way round', () => {
  const { set, truth } = simulatePairs({ seed: 1, units: 5, bothWays: true, seatings: 2 });
  expect([...truth.keys()]).toEqual(['U01', 'U02', 'U03', 'U04', 'U05']);
  expect(set.takes.length).toBe(40);
  for (const { take, deviation } of deviations(set, truth, ['', ''])) {
    expect(Math.max(...deviation.map(Math.abs)), take.id).toBeLessThan(ROUNDING);
  }
});

test('without scatter a directional level is the emitter as it emits and the receiver as it receives', () => {
  const { set, truth } = simulatePairs({ seed: 1, units: 3, bothWays: true, model: 'directional' });
  expect(truth.size).toBe(6);
  for (const { deviation } of deviations(set, truth, [' emit', ' receive'])) {
    expect(Math.max(...deviation.map(Math.abs))).toBeLessThan(ROUNDING);
  }
  const [there, back] = [row(set, 0), row(set, 1)];
  expect(rms(there.map((level, f) => level - back[f]!))).toBeGreaterThan(0.1);
});

test('a unit against itself counts twice', () => {
  const { set, truth } = simulatePairs({ seed: 3, units: 2, pairs: [[1, 1]] });
  row(set, 0).forEach((level, f) => {
    expect(Math.abs(level - 2 * truth.get('U02')![f]!)).toBeLessThan(ROUNDING);
  });
});

test('takes come round by round, pair by pair, repeat by repeat, there and back', () => {
  const { set } = simulatePairs({ seed: 1, units: 3, bothWays: true, seatings: 2, repeats: 2 });
  const round = 1;
  const pair = 2;
  const take = set.takes[((round * 3 + pair) * 2 + 1) * 2 + 1]!;
  expect(take).toMatchObject({
    emitter: 'U03',
    receiver: 'U02',
    repeat: '2',
    emitterSeating: '4',
    receiverSeating: '4',
  });
});

test('repeats, and only repeats, differ in nothing but the repeat, whichever labels tell the rounds apart', () => {
  for (const labels of ['seatings', 'sessions'] as const) {
    for (const mounted of ['for each pair', 'for each round'] as const) {
      const { set } = simulatePairs({ seed: 1, units: 4, seatings: 3, repeats: 2, labels, mounted });
      expect(repeatGroups(set).length).toBe(18);
      expect(repeatGroups(set).every((group) => group.length === 2)).toBe(true);
    }
  }
});

test('the repeat scatter seen is the one asked for', () => {
  const { set } = simulatePairs({
    seed: 11,
    units: 6,
    repeats: 2,
    repeatScatter: 0.12,
    reseatScatter: 0.5,
    partnerScatter: 0.4,
  });
  const differences = repeatGroups(set).flatMap(([a, b]) => row(set, a!).map((level, f) => level - row(set, b!)[f]!));
  expect(Math.abs(rms(differences) / Math.SQRT2 / 0.12 - 1)).toBeLessThan(tolerance(differences.length));
});

test('the reseat scatter seen between mountings of a pair is the one asked for, half of it from each unit', () => {
  const one = Float64Array.of(50_000);
  const options = { seed: 5, units: 2, seatings: 4000, reseatScatter: 0.3, frequencies: one } as const;
  expect(Math.abs(rms(centred(levelsOf(options))) / 0.3 - 1)).toBeLessThan(tolerance(4000));
  // Of two pairs that share the seating of one unit, the covariance is that unit's half.
  const shared = simulatePairs({
    ...options,
    units: 3,
    pairs: [
      [0, 1],
      [0, 2],
    ],
    mounted: 'for each round',
  });
  const first = centred([...shared.set.levels].filter((_, t) => t % 2 === 0));
  const second = centred([...shared.set.levels].filter((_, t) => t % 2 === 1));
  const covariance = mean(first.map((value, k) => value * second[k]!));
  // A covariance of n pairs with variances v and correlation 1/2 is known to v √(1.25 / n).
  expect(Math.abs(covariance - 0.045)).toBeLessThan(4 * 0.09 * Math.sqrt(1.25 / 4000));
});

test('the partner scatter seen over pairs is the one asked for, and the same in every take of a pair', () => {
  const options = {
    seed: 9,
    units: 60,
    frequencies: Float64Array.of(50_000),
    partnerScatter: 0.2,
    bothWays: true,
  } as const;
  const { set, truth } = simulatePairs(options);
  const seen = deviations(set, truth, ['', '']).map(({ deviation }) => deviation[0]!);
  expect(Math.abs(rms(seen) / 0.2 - 1)).toBeLessThan(tolerance(seen.length / 2));
  seen.forEach((value, t) => {
    if (t % 2 === 1) expect(Math.abs(value - seen[t - 1]!)).toBeLessThan(ROUNDING);
  });
});

test('smooth scatter has the stated variance everywhere, and falls to 1/e at the stated distance', () => {
  const correlation = 0.7;
  const frequencies = Float64Array.from([0, 0.1, 0.35, 0.7, 1.4, 5], (octaves) => 10_000 * 2 ** octaves);
  const { set } = simulatePairs({ seed: 2, units: 2, seatings: 6000, reseatScatter: 1, correlation, frequencies });
  const columns = [...frequencies.keys()].map((f) =>
    centred([...set.levels].filter((_, i) => i % frequencies.length === f)),
  );
  columns.forEach((own, f) => {
    expect(Math.abs(rms(own) - 1)).toBeLessThan(tolerance(6000));
    const octaves = Math.log2(frequencies[f]! / frequencies[0]!);
    const seen = mean(own.map((value, k) => value * columns[0]![k]!));
    // A covariance of unit variances is known to √(2/n) at worst.
    expect(Math.abs(seen - Math.exp(-((octaves / correlation) ** 2)))).toBeLessThan(4 * Math.sqrt(2 / 6000));
  });
});

test('resonances that wander move levels near a resonance, and not far from all of them', () => {
  const quiet = { seed: 4, units: 2, seatings: 40, frequencies: logSpaced(80, 10_000, 320_000) } as const;
  const { set } = simulatePairs({ ...quiet, centreWander: 0.01, qualityWander: 0.05 });
  const scatter = [...set.frequencies.keys()].map((f) =>
    rms(centred([...set.levels].filter((_, i) => i % set.frequencies.length === f))),
  );
  expect(Math.max(...scatter)).toBeGreaterThan(10 * Math.min(...scatter));
  expect(rms(centred(levelsOf({ ...quiet, frequencies: Float64Array.of(40_000) })))).toBeLessThan(ROUNDING);
});

test('gains of rounds stand in every take of their round', () => {
  const { set, truth } = simulatePairs({ seed: 1, units: 3, seatings: 2, labels: 'sessions', gains: [0, -1.5] });
  for (const { take, deviation } of deviations(set, truth, ['', ''])) {
    const gain = take.session === 'round 2' ? -1.5 : 0;
    expect(Math.max(...deviation.map((value) => Math.abs(value - gain)))).toBeLessThan(ROUNDING);
  }
});

test('the uncertainty of readings is stated only where it is asked for', () => {
  const options = { seed: 1, units: 3, repeatScatter: 0.1 } as const;
  expect(simulatePairs(options).set.uncertainty).toBeUndefined();
  expect(simulatePairs({ ...options, ownUncertainty: true }).set.uncertainty!.every((u) => u === 0.1)).toBe(true);
});

test('a fault changes its own takes only, and by what was asked for', () => {
  const base = { seed: 6, units: 5, seatings: 2, repeatScatter: 0.1, reseatScatter: 0.3, partnerScatter: 0.1 } as const;
  const difference = (fault: PlantedFault) => {
    const [sound, faulty] = [simulatePairs(base), simulatePairs({ ...base, faults: [fault] })];
    const [planted] = faulty.planted;
    const changed = sound.set.takes.map((_, t) => row(faulty.set, t).map((level, f) => level - row(sound.set, t)[f]!));
    changed.forEach((own, t) => {
      expect(Math.max(...own.map(Math.abs)) > ROUNDING, `take ${t}, ${fault.kind}`).toBe(planted!.takes.includes(t));
    });
    return { takes: planted!.takes, first: changed[planted!.takes[0]!]!, frequencies: sound.set.frequencies };
  };

  const gain = difference({ kind: 'moved gain', take: 4, db: 3 });
  expect(gain.first.every((value) => Math.abs(value - 3) < ROUNDING)).toBe(true);

  const slope = difference({ kind: 'slope', take: 0, dbPerOctave: 0.5 });
  expect(slope.first.at(-1)! - slope.first[0]!).toBeCloseTo(2.5, 9);
  expect(mean(slope.first)).toBeCloseTo(0, 9);

  const bump = difference({ kind: 'local bump', take: 2, from: 30_000, to: 60_000, db: -2 });
  bump.frequencies.forEach((frequency, f) => {
    if (frequency < 30_000 || frequency > 60_000) expect(bump.first[f]).toBe(0);
  });
  expect(Math.min(...bump.first)).toBeLessThan(-1.9);
  expect(Math.min(...bump.first)).toBeGreaterThanOrEqual(-2 - ROUNDING);

  const scatter = difference({ kind: 'scatter', take: 3, db: 0.8 });
  expect(Math.abs(rms(scatter.first) / 0.8 - 1)).toBeLessThan(tolerance(scatter.first.length));

  const drift = difference({ kind: 'drifted unit', unit: 1, fromTake: 9, db: 0.7 });
  expect(drift.takes).toEqual([10, 14, 15, 16]);
  expect(drift.first.every((value) => Math.abs(value - 0.7) < ROUNDING)).toBe(true);
});

test('a take with an exchanged label is the sum of what really stood there, at either end', () => {
  for (const end of ['emitter', 'receiver'] as const) {
    const { set, truth } = simulatePairs({
      seed: 8,
      units: 4,
      faults: [{ kind: 'exchanged label', take: 1, end, unit: 3 }],
    });
    expect([set.takes[1]!.emitter, set.takes[1]!.receiver]).toEqual(['U01', 'U03']);
    const really = end === 'emitter' ? ['U04', 'U03'] : ['U01', 'U04'];
    row(set, 1).forEach((level, f) => {
      expect(Math.abs(level - truth.get(really[0]!)![f]! - truth.get(really[1]!)![f]!)).toBeLessThan(ROUNDING);
    });
  }
});

test('a reversed direction is the take the other way round in the directional model', () => {
  const faults = [{ kind: 'direction reversed', take: 0 }] as const;
  const { set } = simulatePairs({ seed: 8, units: 3, bothWays: true, model: 'directional', faults });
  expect(row(set, 0)).toEqual(row(set, 1));
});

test('a shifting resonance spreads the unit over its partners in its octave, and hardly anywhere else', () => {
  const faults = [{ kind: 'shifting resonance', unit: 2, from: 40_000, to: 80_000, percent: 5 }] as const;
  const { set, truth, planted } = simulatePairs({ seed: 12, units: 10, faults });
  expect(planted[0]!.takes.length).toBe(9);
  const own = deviations(set, truth, ['', '']).filter((_, t) => planted[0]!.takes.includes(t));
  const others = deviations(set, truth, ['', '']).filter((_, t) => !planted[0]!.takes.includes(t));
  for (const { deviation } of others) expect(Math.max(...deviation.map(Math.abs))).toBeLessThan(ROUNDING);
  const scatterAt = (f: number) => rms(centred(own.map(({ deviation }) => deviation[f]!)));
  const inside = [...set.frequencies.keys()].filter(
    (f) => set.frequencies[f]! > 40_000 && set.frequencies[f]! < 80_000,
  );
  const outside = [...set.frequencies.keys()].filter(
    (f) => set.frequencies[f]! < 28_000 || set.frequencies[f]! > 113_000,
  );
  expect(Math.max(...inside.map(scatterAt))).toBeGreaterThan(1);
  expect(Math.max(...outside.map(scatterAt))).toBeLessThan(0.1);
});

test('a fault that is nowhere, or that nothing can show, is refused', () => {
  const options = { seed: 1, units: 3 } as const;
  const plant = (fault: PlantedFault) => () => simulatePairs({ ...options, faults: [fault] });
  expect(plant({ kind: 'moved gain', take: 3, db: 1 })).toThrow(RangeError);
  expect(plant({ kind: 'drifted unit', unit: 3, fromTake: 0, db: 1 })).toThrow(RangeError);
  expect(plant({ kind: 'direction reversed', take: 0 })).toThrow(RangeError);
});

function deviations(set: TakeSet, truth: ReadonlyMap<string, Float64Array>, roles: readonly [string, string]) {
  return set.takes.map((take: Take, t) => {
    const emit = truth.get(take.emitter + roles[0])!;
    const receive = truth.get(take.receiver + roles[1])!;
    return { take, deviation: row(set, t).map((level, f) => level - emit[f]! - receive[f]!) };
  });
}

function levelsOf(options: Parameters<typeof simulatePairs>[0]): number[] {
  return [...simulatePairs(options).set.levels];
}

function row({ levels, frequencies }: TakeSet, take: number): number[] {
  return [...levels.subarray(take * frequencies.length, (take + 1) * frequencies.length)];
}

function centred(values: readonly number[]): number[] {
  const centre = mean(values);
  return values.map((value) => value - centre);
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

function rms(values: readonly number[]): number {
  return Math.sqrt(mean(values.map((value) => value * value)));
}
