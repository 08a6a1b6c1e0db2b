import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type ResponseBudget, uncertaintyBudget } from '../../src/estimate/budget.ts';
import type { Solution } from '../../src/estimate/solution.ts';
import { solve } from '../../src/estimate/solve.ts';
import { thirdOctaves } from '../../src/estimate/third-octaves.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import type { Model } from '../../src/model/model.ts';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { systematicEffects } from '../../src/model/systematic-effects.ts';
import type { BudgetLine } from '../../src/readings/budget-lines.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { randomBench } from '../properties/random-bench.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';
import { pairsOf, takeSetOf } from '../take-set-of.ts';

const EFFECT: BudgetLine = {
  name: 'analyser',
  place: { file: 'budget.csv', line: 2 },
  uncertainty: 0.05,
  distribution: 'normal',
  dof: Number.POSITIVE_INFINITY,
  type: 'B',
  target: 'all',
  label: '',
  from: 0,
  to: Number.POSITIVE_INFINITY,
};

/** The promise of the budget: the squares of its parts sum to that of the whole, to 1e-9 of it. */
const TOLERANCE = 1e-9;
/** A response that a convention fixes has a variance of 0 but for rounding: 16 digits of that of a reading, at most 4 dB². */
const ROUNDING = 1e-14;

function expectClosed(set: TakeSet, model: Model, solution: Solution, budget: readonly ResponseBudget[]): void {
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  for (const { response, from, uncertainty, parts } of budget) {
    const squares = parts.reduce((sum, part) => sum + part.uncertainty ** 2, 0);
    expect(Math.abs(squares - uncertainty ** 2)).toBeLessThanOrEqual(TOLERANCE * uncertainty ** 2 + ROUNDING);
    if (uncertainty ** 2 > ROUNDING) expect(parts.reduce((sum, part) => sum + part.share, 0)).toBeCloseTo(1, 8);
    // The whole is what the responses say, found here by another way.
    const { link } = model.responses[response]!;
    const own = [...set.frequencies.keys()]
      .filter((f) => bands[bandOf[f]!]!.from === from)
      .map((f) => solution.uncertainty[f * model.linksPerFrequency + link]!)
      .filter((u) => !Number.isNaN(u));
    const mean = own.reduce((sum, u) => sum + u * u, 0) / own.length;
    expect(Math.abs(uncertainty ** 2 - mean)).toBeLessThanOrEqual(TOLERANCE * mean + ROUNDING);
  }
}

describe('the budget of a response', () => {
  it('closes for random benches with own uncertainties, certificates, loose gains and systematic effects', async () => {
    let bands = 0;
    const seen = new Set<string>();
    await fc.assert(
      fc.asyncProperty(randomBench(), fc.boolean(), async ({ set, options }, isCertified) => {
        const certificate = {
          unit: set.takes[0]!.emitter,
          mount: '',
          role: options.model === 'directional' ? 'emit' : 'both',
          place: { file: 'refs.csv', line: 2 },
          frequency: Float64Array.of(1000, 2200),
          level: Float64Array.of(-20, -20),
          uncertainty: Float64Array.of(0.2, 0.3),
        } as const;
        const model = buildModel(set, { ...options, references: isCertified ? [certificate] : [] });
        const effects = systematicEffects(set, [EFFECT, { ...EFFECT, name: 'mounting', target: 'unit', to: 1500 }]);
        const solution = await solve(set, model, { effects });
        const budget = uncertaintyBudget(set, model, solution);
        expectClosed(set, model, solution, budget);
        bands += budget.length;
        for (const { parts } of budget) for (const { source } of parts) seen.add(source.split(' ')[0]!);
      }),
      { seed: 11, numRuns: 60 },
    );
    expect(bands).toBeGreaterThan(200);
    expect([...seen].sort()).toEqual(['analyser', 'certificate', 'gain', 'mounting', 'reading']);
  });

  it.each(['for each pair', 'for each round'] as const)(
    'closes with repeats, seatings and partners, mounted %s',
    async (mounted) => {
      const { set } = simulatePairs({
        seed: 3,
        units: 6,
        seatings: 3,
        repeats: 2,
        mounted,
        repeatScatter: 0.1,
        reseatScatter: 0.3,
        partnerScatter: 0.3,
        frequencies: logSpaced(12, 10_000, 80_000),
      });
      const written = {
        ...set,
        levels: set.levels.map((level) => Math.round(level * 10) / 10),
        resolution: 0.1,
      };
      const model = buildModel(written, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
      const effects = systematicEffects(written, [EFFECT]);
      const { solution } = await settle(written, model, { risk: 0.05, effects });
      const budget = uncertaintyBudget(written, model, solution);
      expectClosed(written, model, solution, budget);
      const seen = new Set(budget.flatMap(({ parts }) => parts.map(({ source }) => source)));
      expect([...seen].sort()).toEqual(['analyser', 'partner', 'repeat', 'reseat', 'rounding']);
    },
  );

  /** By hand: H_A = (L_AB + L_AC − L_BC) / 2; an offset of all levels enters by half; the digits of 0.01 dB by u = 0.01/√12. */
  it('of a triangle has the sensitivities and shares that three levels give by hand', async () => {
    const set = {
      ...takeSetOf([1000], pairsOf({ 'A>B': -41.37, 'A>C': -38.92, 'B>C': -44.05 }, { u: 0.06 })),
      resolution: 0.01,
      noiseFactor: Float64Array.of(1.5, 1, 1),
    };
    const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' });
    const solution = await solve(set, model, { effects: systematicEffects(set, [{ ...EFFECT, uncertainty: 0.02 }]) });
    const [ofA] = uncertaintyBudget(set, model, solution);
    const by = new Map(ofA!.parts.map((part) => [part.source, part]));
    expect(by.get('analyser')).toMatchObject({ type: 'B' });
    expect(by.get('analyser')!.sensitivity).toBeCloseTo(0.5, 12);
    expect(by.get('analyser')!.uncertainty).toBeCloseTo(0.01, 12);
    expect(by.get('rounding')!.uncertainty).toBeCloseTo((Math.sqrt(3) / 2) * (0.01 / Math.sqrt(12)), 12);
    // u of L_AB is 0.06 with a factor 1.5 for noise: the clean part is 0.04.
    expect(by.get('noise')!.uncertainty).toBeCloseTo(Math.sqrt(0.06 ** 2 - 0.04 ** 2) / 2, 12);
    expect(by.get('reading')!.sensitivity).toBeCloseTo(Math.sqrt(3) / 2, 12);
  });
});
