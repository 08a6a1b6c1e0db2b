import { describe, expect, it } from 'vitest';
import { solve } from '../../src/estimate/solve.ts';
import { wholeSet } from '../../src/findings/whole-set.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { chiSquareUpper } from '../../src/numeric/chi-square.ts';
import { fUpper } from '../../src/numeric/f-distribution.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';
import type { SimulationOptions } from '../simulation/simulation-options.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

async function judge(set: TakeSet, given?: number, without?: ReadonlySet<number>) {
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
  const left = without ?? new Set<number>();
  return wholeSet(set, model, await solve(set, model, { givenUncertainty: given, without: left }), { without: left });
}

/** Twice the twin readings and the pair between: pair means 12, 13 and 8 leave −1, +2 and −1. */
const TWICE: readonly TakeLine[] = [
  ...pairsOf({ 'A>A': 11, 'A>B': 12, 'B>B': 8 }, { repeat: '1' }),
  ...pairsOf({ 'A>A': 13, 'A>B': 14, 'B>B': 8 }, { repeat: '2' }),
];

describe('chi-square', () => {
  it('stands on an uncertainty that is given, not on one that comes from the takes', async () => {
    const lines = pairsOf({ 'A>A': 12, 'A>B': 13, 'B>B': 8 });
    const [band] = (await judge(takeSetOf([1000], lines), 1)).bands;
    // Residuals −1, −1 and +2 with the twin readings at weight 2² + 1² + …: AA + BB − 2 AB = −6 over √6.
    expect(band!.chiSquare!.chiSquare).toBeCloseTo(6, 9);
    expect(band!.chiSquare!.dof).toBeCloseTo(1, 9);
    expect(band!.chiSquare!.pValue).toBeCloseTo(chiSquareUpper(6, 1), 9);
    expect((await judge(takeSetOf([1000], lines))).bands[0]!.chiSquare).toBeUndefined();
    expect((await judge(takeSetOf([1000], TWICE))).bands[0]!.chiSquare).toBeUndefined();
  });

  it('is absent where nothing is redundant, and its p is not a number', async () => {
    const { bands, chiSquareP, lackOfFitP } = await judge(
      takeSetOf([1000], pairsOf({ 'A>B': 10, 'B>C': 8, 'C>A': 6 })),
      0.2,
    );
    expect(bands[0]).toMatchObject({ chiSquare: undefined, lackOfFit: undefined });
    expect([chiSquareP, lackOfFitP]).toEqual([Number.NaN, Number.NaN]);
  });

  it('leaves out the takes that the solution leaves out', async () => {
    const lines = [...pairsOf({ 'A>A': 12, 'A>B': 10, 'B>B': 8 }), ...pairsOf({ 'B>A': 30 })];
    const [band] = (await judge(takeSetOf([1000], lines), 1, new Set([3]))).bands;
    expect(band!.chiSquare!.chiSquare).toBeCloseTo(0, 9);
  });
});

describe('lack of fit', () => {
  it('repeats: pair means against repeats, by hand', async () => {
    const { bands, pureErrorFrom } = await judge(takeSetOf([1000], TWICE));
    expect(pureErrorFrom).toBe('repeats');
    const { lackOfFit, lackDof, pureError, pureDof, f, pValue } = bands[0]!.lackOfFit!;
    // Two takes each of −1, +2 and −1; repeats stand ±1, ±1 and 0 off their means.
    expect([lackOfFit, lackDof, pureError, pureDof].map((x) => Number(x.toFixed(9)))).toEqual([12, 1, 4, 3]);
    expect(f).toBeCloseTo(9, 9);
    expect(pValue).toBeCloseTo(fUpper(9, 1, 3), 9);
  });

  it('where a pair was mounted again, repeats count as one and only mountings are pure error', async () => {
    const seated = TWICE.map((line) => ({ ...line, emitterSeating: line.repeat!, receiverSeating: line.repeat! }));
    // A second repeat that says the same changes nothing.
    const lines = [...seated, ...seated.map((line) => ({ ...line, repeat: `${line.repeat}b` }))];
    const { bands, pureErrorFrom } = await judge(takeSetOf([1000], lines));
    expect(pureErrorFrom).toBe('reseats');
    expect(bands[0]!.lackOfFit!.f).toBeCloseTo(9, 9);
    expect(bands[0]!.lackOfFit!.pureDof).toBeCloseTo(3, 9);
  });

  it('without repeats or reseats there is no pure error', async () => {
    const { bands, pureErrorFrom } = await judge(takeSetOf([1000], pairsOf({ 'A>A': 12, 'A>B': 13, 'B>B': 8 })), 1);
    expect([pureErrorFrom, bands[0]!.lackOfFit]).toEqual(['nothing', undefined]);
  });
});

describe('simulated sets', () => {
  const SETS = 100;
  const simulate = (seed: number, more: Partial<SimulationOptions>) =>
    simulatePairs({
      units: 6,
      seatings: 2,
      repeatScatter: 0.1,
      frequencies: logSpaced(60, 10_000, 320_000),
      ownUncertainty: true,
      ...more,
      seed,
    }).set;
  async function shares(more: Partial<SimulationOptions>) {
    let [chiSquare, lack] = [0, 0];
    for (let seed = 1; seed <= SETS; seed++) {
      const { chiSquareP, lackOfFitP } = await judge(simulate(seed, more));
      if (chiSquareP <= 0.05) chiSquare++;
      if (lackOfFitP <= 0.05) lack++;
    }
    return { chiSquare: chiSquare / SETS, lack: lack / SETS };
  }
  /** Four sampling errors above a risk of 5 %. */
  const AT_RISK = 0.05 + 4 * Math.sqrt((0.05 * 0.95) / SETS);

  it('with the stated uncertainty true, neither test speaks more often than its risk', async () => {
    const { chiSquare, lack } = await shares({});
    expect(chiSquare).toBeLessThanOrEqual(AT_RISK);
    expect(lack).toBeLessThanOrEqual(AT_RISK);
  });

  it('mountings speak in chi-square, and are no lack of fit, although frequencies are correlated', async () => {
    const { chiSquare, lack } = await shares({ reseatScatter: 0.3 });
    expect(chiSquare).toBeGreaterThan(0.95);
    expect(lack).toBeLessThanOrEqual(AT_RISK);
  });

  it('partners of 0.5 dB are lack of fit', async () => {
    expect((await shares({ reseatScatter: 0.15, partnerScatter: 0.5 })).lack).toBeGreaterThan(0.95);
  });
});
