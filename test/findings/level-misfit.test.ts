import { describe, expect, it } from 'vitest';
import { levelMisfit } from '../../src/findings/level-misfit.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';
import type { SimulationOptions } from '../simulation/simulation-options.ts';
import { pairsOf, takeSetOf } from '../take-set-of.ts';

const judge = (set: TakeSet) => levelMisfit(set, buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' }));

const FREQUENCIES = logSpaced(150, 10_000, 320_000);
const simulate = (seed: number, more: Partial<SimulationOptions> = {}) =>
  simulatePairs({
    units: 8,
    seatings: 2,
    repeats: 2,
    repeatScatter: 0.15,
    reseatScatter: 0.3,
    partnerScatter: 0.1,
    frequencies: FREQUENCIES,
    ...more,
    seed,
  }).set;

const decibels = (power: number) => 10 * Math.log10(power);
const power = (level: number) => 10 ** (level / 10);
/** What a level loses where the recorder gives 1 dB less at `knee` and ever less above, or gains where noise adds 1 dB at it. */
const KNEE_OF_1_DB = decibels(power(1) - 1);
const loss = (level: number, knee: number) => decibels(1 + power(level - knee + KNEE_OF_1_DB));
const gain = (level: number, floor: number) => loss(-level, -floor);

const quantile = (values: Iterable<number>, part: number) => {
  const sorted = Float64Array.from(values).sort();
  return sorted[Math.round(part * (sorted.length - 1))]!;
};

interface Bent {
  readonly set: TakeSet;
  /** Takes of which a reading is off by more than half a decibel. */
  readonly takes: ReadonlySet<number>;
}

function bent(set: TakeSet, change: (level: number, take: number) => number): Bent {
  const width = set.frequencies.length;
  const takes = new Set<number>();
  const levels = set.levels.map((level, cell) => {
    const take = Math.floor(cell / width);
    const by = change(level, take);
    if (Math.abs(by) > 0.5) takes.add(take);
    return level + by;
  });
  return { set: { ...set, levels }, takes };
}

/** Each reading by its own level, as a sine at a time does: 1 dB at the level that one reading in fifty exceeds. */
function saturatedReadings(set: TakeSet): Bent {
  const knee = quantile(set.levels, 0.98);
  return bent(set, (level) => -loss(level, knee));
}

function drownedReadings(set: TakeSet): Bent {
  const floor = quantile(set.levels, 0.02);
  return bent(set, (level) => gain(level, floor));
}

/** Each take as a whole by its power, as a pulse does: 1 dB at the power that one take in ten exceeds. */
function saturatedTakes(set: TakeSet): Bent {
  const width = set.frequencies.length;
  const powers = set.takes.map((_, t) =>
    decibels(set.levels.subarray(t * width, (t + 1) * width).reduce((sum, level) => sum + power(level) / width, 0)),
  );
  const knee = quantile(powers, 0.9);
  return bent(set, (_, take) => -loss(powers[take]!, knee));
}

const SEEDS = Array.from({ length: 20 }, (_, k) => k + 1);
const MOST = 0.9 * SEEDS.length;

/** In how many sets the end is shown, and of all takes that are off how many are named. */
function outcome(plant: (set: TakeSet) => Bent, end: 'upper' | 'lower') {
  let found = 0;
  let other = 0;
  let named = 0;
  let touched = 0;
  for (const seed of SEEDS) {
    const { set, takes } = plant(simulate(seed));
    const { bands, together, takes: whole } = judge(set);
    const ends = [...bands.flatMap(({ upper, lower }) => [upper, lower]), ...together, ...whole];
    const shown = ends.filter(({ isShown }) => isShown);
    if (shown.some((one) => one.end === end)) found++;
    if (shown.some((one) => one.end !== end)) other++;
    const names = new Set(shown.filter((one) => one.end === end).flatMap((one) => one.takes.map(({ take }) => take)));
    named += [...takes].filter((take) => names.has(take)).length;
    touched += takes.size;
  }
  return { found, other, named: named / touched };
}

describe('misfit that depends on the level', () => {
  it('readings compressed by 1 dB are found as saturation in at least 18 of 20 sets, and their takes named', () => {
    const { found, other, named } = outcome(saturatedReadings, 'upper');
    expect(found).toBeGreaterThanOrEqual(MOST);
    expect(other).toBeLessThanOrEqual(1);
    expect(named).toBeGreaterThan(0.9);
  });

  it('takes compressed by 1 dB as a whole are found as saturation in at least 18 of 20 sets, and named', () => {
    const { found, other, named } = outcome(saturatedTakes, 'upper');
    expect(found).toBeGreaterThanOrEqual(MOST);
    expect(other).toBeLessThanOrEqual(1);
    expect(named).toBeGreaterThan(0.9 * (MOST / SEEDS.length));
  });

  it('readings lifted by 1 dB are found as noise floor in at least 18 of 20 sets, and their takes named', () => {
    const { found, other, named } = outcome(drownedReadings, 'lower');
    expect(found).toBeGreaterThanOrEqual(MOST);
    expect(other).toBeLessThanOrEqual(1);
    expect(named).toBeGreaterThan(0.9);
  });

  it('of 100 clean sets at most 5 show any, whether mountings, partners or neither scatter', () => {
    let shown = 0;
    for (let seed = 101; seed <= 200; seed++) {
      const scatter = [{}, { reseatScatter: 0 }, { partnerScatter: 0.3 }, { correlation: 3 }][seed % 4]!;
      if (judge(simulate(seed, scatter)).verdict !== 'none shown') shown++;
    }
    expect(shown).toBeLessThanOrEqual(5);
  });

  it('a pair that is 4 dB off as a whole, the strongest or the weakest, is no question of level in at least 9 of 10 sets', () => {
    let mistaken = 0;
    for (const seed of SEEDS) {
      const clean = simulate(seed);
      const width = clean.frequencies.length;
      const medians = clean.takes.map((_, t) => quantile(clean.levels.subarray(t * width, (t + 1) * width), 0.5));
      for (const [wanted, db] of [[Math.max(...medians), -4] as const, [Math.min(...medians), 4] as const]) {
        const { emitter, receiver } = clean.takes[medians.indexOf(wanted)]!;
        const isPair = (t: number) => clean.takes[t]!.emitter === emitter && clean.takes[t]!.receiver === receiver;
        if (judge(bent(clean, (_, t) => (isPair(t) ? db : 0)).set).verdict !== 'none shown') mistaken++;
      }
    }
    expect(mistaken).toBeLessThanOrEqual(0.1 * 2 * SEEDS.length);
  });
});

describe('what cannot be tested', () => {
  const SQUARE = { 'A>B': 10, 'B>C': 8, 'C>D': 5, 'D>A': 6, 'A>C': 9 };

  it('an exact fit, a single degree of freedom, and pairs at one level are not testable', () => {
    expect(judge(takeSetOf([1000], pairsOf({ 'A>B': 10, 'B>C': 8, 'C>A': 5 }))).verdict).toBe('not testable');
    expect(judge(takeSetOf([1000], pairsOf(SQUARE))).verdict).toBe('not testable');
    const six = { ...SQUARE, 'B>D': 7 };
    expect(judge(takeSetOf([1000], pairsOf(six))).verdict).toBe('none shown');
    const level = Object.fromEntries(Object.keys(six).map((pair) => [pair, 5]));
    const { verdict, bands } = judge(takeSetOf([1000], pairsOf(level)));
    expect(verdict).toBe('not testable');
    expect(bands[0]!.additivity.p).toBeNaN();
    expect(bands[0]!.upper).toMatchObject({ slope: Number.NaN, pValue: Number.NaN, isShown: false, takes: [] });
  });

  it('a take that misses a frequency of a band does not count in it', () => {
    const lines = pairsOf({ ...SQUARE, 'B>D': 7 }).map((line, t) => ({
      ...line,
      levels: [line.levels[0]!, t === 0 ? Number.NaN : line.levels[0]!, line.levels[0]!],
    }));
    const { bands } = judge(takeSetOf([980, 1000, 4000], lines));
    expect(bands.map(({ pairs, dof }) => [pairs, dof])).toEqual([
      [5, 1],
      [6, 2],
    ]);
  });
});
