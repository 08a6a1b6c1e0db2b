import { describe, expect, it } from 'vitest';
import { chooseModel } from '../../src/model/choose-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { testReciprocity } from '../../src/model/reciprocity.ts';
import { fUpper } from '../../src/numeric/f-distribution.ts';
import { randomStream } from '../../src/numeric/random.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const choose = (lines: readonly TakeLine[], options: Partial<ModelOptions> = {}, frequencies = [1000]) =>
  chooseModel(takeSetOf(frequencies, lines), { ...DEFAULT_MODEL_OPTIONS, ...options });

/** Both directions of a pair: there − here = difference. */
const bothWays = (differences: Readonly<Record<string, number>>): TakeLine[] =>
  Object.entries(differences).flatMap(([pair, difference]) => {
    const [a, b] = pair.split('>') as [string, string];
    return pairsOf({ [`${a}>${b}`]: difference / 2, [`${b}>${a}`]: -difference / 2 });
  });

describe('reciprocity test', () => {
  it('splits the differences into unit terms and rest: a triangle by hand', () => {
    // Differences 1, 1 and −1 around a triangle: terms 2/3, 0, −2/3 fit 2/3, 2/3, −4/3; rest 1/3 each.
    const { pairs, whole } = testReciprocity(takeSetOf([1000], bothWays({ 'A>B': 1, 'B>C': 1, 'C>A': -1 })));
    expect(pairs).toBe(3);
    expect([whole.unitDof, whole.restDof]).toEqual([2, 1]);
    // Squares 8/3 on 2 and 1/3 on 1.
    expect(whole.f).toBeCloseTo(4, 12);
    expect(whole.pValue).toBeCloseTo(fUpper(4, 2, 1), 12);
    expect(whole.rmsDifference).toBeCloseTo(1, 12);
  });

  it('has nothing to test with on a tree of pairs, or without pairs taken both ways', () => {
    const tree = testReciprocity(takeSetOf([1000], bothWays({ 'A>B': 1, 'B>C': 2 })));
    expect([tree.pairs, tree.whole.restDof]).toEqual([2, 0]);
    expect(tree.whole.pValue).toBeNaN();
    expect(testReciprocity(takeSetOf([1000], pairsOf({ 'A>B': 0 }))).pairs).toBe(0);
  });

  it('leaves readings of a unit against itself out', () => {
    expect(testReciprocity(takeSetOf([1000], pairsOf({ 'A>A': 0, 'B>B': 1 }))).pairs).toBe(0);
  });

  it('weights a pair by the takes behind both of its directions', () => {
    const lines = [...bothWays({ 'A>B': 1, 'B>C': 1, 'C>A': -1 }), ...pairsOf({ 'A>B': 0.5 }, { repeat: '2' })];
    const { whole } = testReciprocity(takeSetOf([1000], lines));
    // A>B stands on two takes. Weights 2/3, 1/2, 1/2: the misclosure of 1 leaves a square of 1 / (3/2 + 2 + 2) = 2/11; the total is 5/3.
    expect(whole.f).toBeCloseTo((5 / 3 - 2 / 11) / 2 / (2 / 11), 12);
  });

  it('tells mounts of a unit apart', () => {
    const lines = [
      { emitter: 'A', emitterMount: 'bare', receiver: 'B', levels: [0] },
      { emitter: 'B', receiver: 'A', receiverMount: 'clamped', levels: [1] },
    ];
    expect(testReciprocity(takeSetOf([1000], lines)).pairs).toBe(0);
  });
});

describe('choice of the model', () => {
  it('is the user’s where one was named', () => {
    expect(choose(pairsOf({ 'A>B': 0 }), { model: 'reciprocal' }).kind).toBe('reciprocal');
    expect(choose(pairsOf({ 'A>B': 0 }), { model: 'directional' }).kind).toBe('directional');
  });

  it('is directional where no unit has both roles, a unit is declared reversible, or a reference is of one role', () => {
    expect(choose(pairsOf({ 'P>H': 0 })).kind).toBe('directional');
    expect(choose(pairsOf({ 'A>B': 0, 'B>C': 0 }), { reversible: ['B'] }).kind).toBe('directional');
    const one = Float64Array.of(1000);
    const place = { file: 'refs.csv', line: 2 };
    const spectrum = { frequency: one, level: one, uncertainty: one };
    const reference = { unit: 'B', mount: '', role: 'emit' as const, place, ...spectrum };
    const { kind, reason } = choose(pairsOf({ 'A>B': 0, 'B>A': 0 }), { references: [reference] });
    expect(kind).toBe('directional');
    expect(reason).toContain('reference for B');
  });

  it('is reciprocal, and says that it was not tested, where no pair was taken both ways or no chain closes', () => {
    const assumed = choose(pairsOf({ 'A>B': 0, 'B>C': 0, 'C>A': 0 }));
    expect(assumed.kind).toBe('reciprocal');
    expect(assumed.reason).toContain('not tested');
    const apart = choose(
      [
        { emitter: 'A', receiver: 'B', levels: [-3, Number.NaN] },
        { emitter: 'B', receiver: 'A', levels: [Number.NaN, -4] },
      ],
      {},
      [1000, 8000],
    );
    expect(apart.kind).toBe('reciprocal');
    expect(apart.reason).toContain('not in the same third-octave');
    const tree = choose(bothWays({ 'A>B': 6, 'B>C': 5 }));
    expect(tree.kind).toBe('reciprocal');
    expect(tree.reason).toContain('assumed');
  });

  const FREQUENCIES = Array.from({ length: 40 }, (_, k) => 1000 * 10 ** (k / 40));
  const SEEDS = 200;
  /** Neighbouring frequencies of a spectrum are much alike: correlation of the scatter from one to the next. */
  const ALIKE = 0.95;

  /** All ordered pairs of six units; emit and receive differ by a normal amount of `asymmetry` dB, scatter 0.3 dB. */
  function directionsOf(seed: number, asymmetry: number) {
    const random = randomStream(seed);
    const smooth = (deviation: number) => {
      let value = random.normal();
      return FREQUENCIES.map(() => {
        const here = value;
        value = ALIKE * value + Math.sqrt(1 - ALIKE * ALIKE) * random.normal();
        return deviation * here;
      });
    };
    const units = Array.from({ length: 6 }, () => ({ response: smooth(3), excess: asymmetry * random.normal() }));
    const lines = units.flatMap((a, i) =>
      units.flatMap((b, j): TakeLine[] => {
        if (i === j) return [];
        const noise = smooth(0.3);
        const levels = noise.map((e, f) => a.response[f]! + b.response[f]! + (a.excess - b.excess) / 2 + e);
        return [{ emitter: `U${i}`, receiver: `U${j}`, levels }];
      }),
    );
    return chooseModel(takeSetOf(FREQUENCIES, lines), DEFAULT_MODEL_OPTIONS).kind;
  }
  const share = (asymmetry: number, kind: string) =>
    Array.from({ length: SEEDS }, (_, seed) => directionsOf(seed + 1, asymmetry)).filter((chosen) => chosen === kind)
      .length / SEEDS;

  it('keeps a reciprocal set reciprocal in at least 99 % of simulated sets, although frequencies are correlated', () => {
    expect(share(0, 'reciprocal')).toBeGreaterThanOrEqual(0.99);
  });

  it('calls a set directional whose units differ by 1 dB between their roles, in at least 90 %', () => {
    expect(share(1, 'directional')).toBeGreaterThanOrEqual(0.9);
  });
});
