import { describe, expect, it } from 'vitest';
import { examine } from '../../src/findings/examine.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { studentQuantile } from '../../src/numeric/student-t.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const NONE = Number.NaN;
const RECIPROCAL: ModelOptions = { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' };

async function examined(set: TakeSet, options = RECIPROCAL, givenUncertainty?: number) {
  const model = buildModel(set, options);
  const settled = await settle(set, model, { givenUncertainty, risk: 0.01 });
  return { model, settled, examination: examine(set, model, settled, { coverage: 0.95, tolerance: 1, risk: 0.01 }) };
}
const at = async (lines: readonly TakeLine[], given?: number) =>
  (await examined(takeSetOf([1000, 1100, 8000].slice(0, lines[0]!.levels.length), lines), RECIPROCAL, given))
    .examination;

describe('takes and pairs', () => {
  it('a take without a reading has no figures, and does not spoil those of its pair', async () => {
    const lines = [
      ...pairsOf({ 'A>A': -40 }, { session: '1' }),
      ...pairsOf({ 'A>A': -41 }, { session: '2' }),
      { emitter: 'A', receiver: 'A', session: '3', levels: [NONE] },
    ];
    const { takes, pairs } = await at(lines, 0.1);
    expect(takes[2]).toMatchObject({
      readings: 0,
      rmsResidual: NONE,
      offset: NONE,
      redundancy: NONE,
      worst: undefined,
    });
    expect(pairs).toHaveLength(1);
    expect(pairs[0]).toMatchObject({ takes: [0, 1, 2] });
    expect(pairs[0]!.redundancy).toBeCloseTo(0.5, 12);
    expect(pairs[0]!.rmsResidual).toBeCloseTo(0.5, 12);
  });

  it('the worst band is the third-octave with the largest mean residual, with its sign', async () => {
    const lines = [
      { emitter: 'A', receiver: 'A', session: '1', levels: [0, 2, 0] },
      { emitter: 'A', receiver: 'A', session: '2', levels: [2, 0, -1] },
    ];
    // Residuals −1, +1 in the band of 1 kHz cancel; ±0.5 in that of 8 kHz is the worst.
    const { takes } = await at(lines, 0.1);
    expect(takes[0]!.worst!.level).toBeCloseTo(0.5, 12);
    expect(takes[1]!.worst!.level).toBeCloseTo(-0.5, 12);
    expect(takes[0]!.worst!.from).toBeGreaterThan(7000);
  });
});

describe('units', () => {
  it('medians over the frequencies at which a unit is known, and how many of each status', async () => {
    const lines = pairsOf({ 'A>B': -40, 'A>C': -40, 'B>C': -40 }, { u: 0.2 }).map((line, t) => ({
      ...line,
      levels: [-40, -44, t === 2 ? NONE : -40],
    }));
    const [unit] = (await at(lines)).units;
    expect(unit!.medianLevel).toBeCloseTo(-21, 12);
    expect(unit!.medianUncertainty).toBeCloseTo(0.2 * Math.sqrt(0.75), 12);
    expect(unit!.medianExpanded).toBeCloseTo(
      studentQuantile(0.975, Number.POSITIVE_INFINITY) * 0.2 * Math.sqrt(0.75),
      9,
    );
    expect(unit!.counts).toEqual({ ok: 2, datum: 0, open: 1 });
  });

  it('of a bench without spare takes are unchecked, every one of them', async () => {
    const { takes, units } = await at(pairsOf({ 'A>B': -40, 'A>C': -41, 'B>C': -42 }), 0.1);
    expect(takes.map(({ redundancy }) => redundancy)).toEqual([0, 0, 0]);
    expect(takes.map(({ offset }) => offset)).toEqual([NONE, NONE, NONE]);
    expect(units.map(({ unchecked }) => unchecked)).toEqual([true, true, true]);
  });

  it('a unit on a tail is unchecked while those of the ring are checked', async () => {
    const ring = pairsOf({ 'A>B': 0, 'A>C': 0, 'B>C': 0, 'A>D': 0, 'B>D': 0, 'C>E': 0 });
    const { units } = await at(ring, 0.1);
    expect(units.filter(({ unchecked }) => unchecked)).toHaveLength(1);
    expect(units[4]!.unchecked).toBe(true);
  });
});

describe('the whole', () => {
  it('chi-square per degree of freedom holds the residuals against the uncertainties given', async () => {
    const twice = [...pairsOf({ 'A>A': 0 }, { session: '1' }), ...pairsOf({ 'A>A': 2 }, { session: '2' })];
    const { whole } = await at(twice, 0.5);
    // Residuals ±1: squares 2 on one degree of freedom, in units of 0.25.
    expect(whole.rmsResidual).toBeCloseTo(1, 12);
    expect(whole.residualDeviation).toBeCloseTo(Math.SQRT2, 12);
    expect(whole.degreesOfFreedom).toBeCloseTo(1, 12);
    expect(whole.chiSquarePerDof).toBeCloseTo(8, 9);
    expect((await at(twice)).whole.chiSquarePerDof).toBeNaN();
  });

  it('is held against the bands that have an uncertainty where repeats tell it for some only', async () => {
    const lines = [
      { emitter: 'A', receiver: 'A', levels: [0, 0, 0] },
      { emitter: 'A', receiver: 'A', repeat: '2', levels: [2, 2, NONE] },
      { emitter: 'A', receiver: 'A', session: '2', levels: [1, 1, 5] },
    ];
    // Repeats 2 dB apart: s² = 2. Residuals −1, 1, 0: 2/2 on 2 degrees of freedom at each of two frequencies.
    const { whole } = await at(lines);
    expect(whole.chiSquarePerDof).toBeCloseTo(0.5, 12);
  });

  it('a gain that is 0 dB by convention is told', async () => {
    const set = takeSetOf([1000], pairsOf({ 'A>B': 0, 'A>C': 0, 'B>C': 0 }, { u: 0.1, session: 'am' }));
    const { examination } = await examined(set, { ...RECIPROCAL, looseGain: true });
    expect(examination.open).toMatchObject([
      { kind: 'gain', status: 'datum', responses: ['gain am'], convention: 'gain am = 0 dB' },
    ]);
  });
});
